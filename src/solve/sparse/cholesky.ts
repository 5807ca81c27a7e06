// Multifrontal Cholesky factorisation of a sum of element matrices (I.S. Duff, J.K. Reid, ACM TOMS 9 (1983) 302).
// Each front gathers its element matrices and its children's updates in a dense matrix, eliminates its pivots there, keeps their
// columns of L and passes the Schur complement on. No sparse matrix is formed in between.

import { blockStarts, cliqueDofs, type CliqueGraph } from './graph.ts'
import { factoriseFront } from './kernel.ts'
import { assemblyTree, type Front } from './ordering.ts'

/** All that the pattern determines; serves every matrix with this pattern. */
export interface Symbolic {
  readonly graph: CliqueGraph
  readonly n: number
  readonly fronts: readonly Front[]
  /** Dofs of each front: its pivots' first, then the rest's. */
  readonly frontDofs: readonly Int32Array[]
  /** How many of them are pivots. */
  readonly pivotCount: Int32Array
  /** Dofs of each clique, the rows of its element matrix. */
  readonly cliqueDofs: readonly Int32Array[]
  /** Entries of the lower triangle of L, diagonal included. */
  readonly nnzL: number
}

/** L of P A P^T = L L^T, front by front: row by row, each row cut to the front's pivots (rows of pivots: lower triangle). */
export interface Factor {
  readonly symbolic: Symbolic
  readonly columns: readonly Float64Array[]
}

/** The matrix is not positive definite: eliminating this dof left nothing (or less) of its diagonal. */
export class SingularError extends Error {
  override name = 'SingularError'
  constructor(readonly dof: number) {
    super(`the matrix is singular: dof ${dof} is not held`)
  }
}

/** A pivot below this share of the dof's original diagonal counts as zero. */
const LEAST_PIVOT = 1e-13

/** Ordering and pattern of the factor. */
export function analyse(graph: CliqueGraph): Symbolic {
  const start = blockStarts(graph)
  const fronts = assemblyTree(graph)
  const dofsOf = (blocks: Int32Array): number[] => {
    const dofs: number[] = []
    for (const block of blocks) for (let d = start[block]; d < start[block + 1]; d++) dofs.push(d)
    return dofs
  }
  const pivotCount = new Int32Array(fronts.length)
  let nnzL = 0
  const frontDofs = fronts.map(({ pivots, rest }, f) => {
    const own = dofsOf(pivots)
    const dofs = Int32Array.from([...own, ...dofsOf(rest)])
    pivotCount[f] = own.length
    nnzL += own.length * dofs.length - (own.length * (own.length - 1)) / 2
    return dofs
  })
  const cliques = Array.from({ length: graph.cliqueStart.length - 1 }, (_, e) => cliqueDofs(graph, start, e))
  return { graph, n: start[graph.vertices], fronts, frontDofs, pivotCount, cliqueDofs: cliques, nnzL }
}

/**
 * Factor of the sum of the element matrices (square, row by row, symmetric, one a clique in the order of its dofs).
 * A dof marked in `fixed` has its row and column replaced by those of the identity.
 * @throws SingularError when the matrix is not positive definite to rounding
 */
export function factorise(symbolic: Symbolic, elements: readonly Float64Array[], fixed: Uint8Array): Factor {
  const { fronts, frontDofs, pivotCount, n } = symbolic
  const diagonal = diagonalOf(symbolic, elements)
  const place = new Int32Array(n)
  const updates: (Float64Array | null)[] = fronts.map(() => null)
  const columns = fronts.map((front, f) => {
    const dofs = frontDofs[f]
    const size = dofs.length
    const pivots = pivotCount[f]
    dofs.forEach((dof, i) => (place[dof] = i))
    const dense = new Float64Array(size * size)
    for (const e of front.cliques) addMatrix(dense, size, place, symbolic.cliqueDofs[e], 0, elements[e], fixed)
    for (const child of front.children) {
      addMatrix(dense, size, place, frontDofs[child], pivotCount[child], updates[child]!, fixed)
      updates[child] = null
    }
    const least = new Float64Array(pivots)
    for (let i = 0; i < pivots; i++) {
      if (fixed[dofs[i]]) dense[i * size + i] = 1
      else least[i] = LEAST_PIVOT * diagonal[dofs[i]]
    }
    const failed = factoriseFront(dense, size, pivots, least)
    if (failed >= 0) throw new SingularError(dofs[failed])

    const rest = size - pivots
    const update = new Float64Array(rest * rest)
    for (let i = 0; i < rest; i++) {
      const from = (pivots + i) * size + pivots
      update.set(dense.subarray(from, from + i + 1), i * rest)
    }
    updates[f] = update
    const kept = new Float64Array(size * pivots)
    for (let i = 0; i < size; i++) kept.set(dense.subarray(i * size, i * size + pivots), i * pivots)
    return kept
  })
  return { symbolic, columns }
}

/** Adds the lower triangle of a matrix on dofs[skip ..] to a front, in place; fixed rows and columns are left out. */
function addMatrix(
  front: Float64Array,
  size: number,
  place: Int32Array,
  dofs: Int32Array,
  skip: number,
  matrix: Float64Array,
  fixed: Uint8Array
): void {
  const n = dofs.length - skip
  for (let i = 0; i < n; i++) {
    const row = dofs[skip + i]
    if (fixed[row]) continue
    const a = place[row]
    for (let j = 0; j <= i; j++) {
      const column = dofs[skip + j]
      if (fixed[column]) continue
      const b = place[column]
      if (a >= b) front[a * size + b] += matrix[i * n + j]
      else front[b * size + a] += matrix[i * n + j]
    }
  }
}

function diagonalOf({ n, cliqueDofs: dofs }: Symbolic, elements: readonly Float64Array[]): Float64Array {
  const diagonal = new Float64Array(n)
  elements.forEach((matrix, e) => {
    const size = dofs[e].length
    for (let i = 0; i < size; i++) diagonal[dofs[e][i]] += matrix[i * size + i]
  })
  return diagonal
}

/** Solution of L L^T x = b (n numbers), b untouched. */
export function solveFactor({ symbolic, columns }: Factor, b: Float64Array): Float64Array {
  const { frontDofs, pivotCount } = symbolic
  const x = b.slice()
  columns.forEach((l, f) => {
    const dofs = frontDofs[f]
    const pivots = pivotCount[f]
    for (let i = 0; i < dofs.length; i++) {
      const width = i < pivots ? i : pivots
      let sum = x[dofs[i]]
      for (let k = 0; k < width; k++) sum -= l[i * pivots + k] * x[dofs[k]]
      x[dofs[i]] = i < pivots ? sum / l[i * pivots + i] : sum
    }
  })
  for (let f = columns.length - 1; f >= 0; f--) {
    const l = columns[f]
    const dofs = frontDofs[f]
    const pivots = pivotCount[f]
    for (let i = dofs.length - 1; i >= 0; i--) {
      if (i < pivots) x[dofs[i]] /= l[i * pivots + i]
      const value = x[dofs[i]]
      const width = i < pivots ? i : pivots
      for (let k = 0; k < width; k++) x[dofs[k]] -= l[i * pivots + k] * value
    }
  }
  return x
}

// Multifrontal Cholesky factorisation of a sum of element matrices (I.S. Duff, J.K. Reid, ACM TOMS 9 (1983) 302).
// Each front gathers its element matrices and its children's updates, eliminates its pivots and passes the Schur complement on.
// L grows in one arena of its exact size; the updates live on a stack of theirs. No sparse matrix is formed in between.

import { eliminateFront } from './kernel.ts'
import type { Symbolic } from './symbolic.ts'

export { analyse, type Symbolic } from './symbolic.ts'

/** L of P A P^T = L L^T. */
export interface Factor {
  readonly symbolic: Symbolic
  /**
   * Front f from symbolic.lowerStart[f]: its pivots' rows, then its other rows, each with one number a pivot. Rows of pivots hold
   * the lower triangle of L, with the reciprocals of the diagonal.
   */
  readonly lower: Float64Array
}

/** The matrix is not positive definite: eliminating this dof left nothing (or less) of its diagonal. */
export class SingularError extends Error {
  override name = 'SingularError'
  constructor(readonly dof: number) {
    super(`the matrix is singular: dof ${dof} is not held`)
  }
}

/**
 * A pivot below this share of the dof's original diagonal counts as zero. Rounding leaves up to 4e-12 where nothing at all holds a
 * plate of 100 000 dofs; three supports leave more than 1e-5 even of a plate 1000 times as long as wide. In between stands what is
 * held but for one turn about a point: rounding leaves as much as 1e-7 there on long plates, so not every one of these is found.
 */
const LEAST_PIVOT = 1e-11

/**
 * Factor of the sum of the element matrices (square, row by row, symmetric, one a clique in the order of its dofs).
 * A dof marked in `fixed` (n numbers) has its row and column replaced by those of the identity.
 * @throws SingularError when the matrix is not positive definite to rounding
 */
export function factorise(symbolic: Symbolic, elements: readonly Float64Array[], fixed: Uint8Array): Factor {
  const { n, fronts, order, pivotStart, rowStart, row, children, lowerStart, frontCliqueStart, frontClique } = symbolic
  const lower = new Float64Array(lowerStart[fronts])
  const stack = new Float64Array(symbolic.stackSize)
  const least = leastPivots(symbolic, elements, fixed)
  const place = new Int32Array(n) // row in the current front of each position
  const within = new Int32Array(n) // row in the current front of each row of a child or an element matrix, -1 of a fixed one
  const open = new Int32Array(fronts) // fronts whose updates are on the stack
  let openCount = 0
  let top = 0
  for (let f = 0; f < fronts; f++) {
    const pivots = pivotStart[f + 1] - pivotStart[f]
    const rows = rowStart[f + 1] - rowStart[f]
    const at = lowerStart[f]
    for (let i = 0; i < pivots; i++) {
      place[pivotStart[f] + i] = i
      if (fixed[order[pivotStart[f] + i]]) lower[at + i * pivots + i] = 1
    }
    for (let i = 0; i < rows; i++) place[row[rowStart[f] + i]] = pivots + i

    // the new update is made above those of the children, and takes their place when it is done
    const size = (rows * (rows + 1)) / 2
    stack.fill(0, top, top + size)
    for (let k = frontCliqueStart[f]; k < frontCliqueStart[f + 1]; k++) {
      const e = frontClique[k]
      const count = placeElement(symbolic, e, fixed, place, within)
      addElement(lower, at, pivots, stack, top, within, count, elements[e])
    }
    let base = top
    for (let k = 0; k < children[f]; k++) {
      const child = open[--openCount]
      const count = rowStart[child + 1] - rowStart[child]
      for (let i = 0; i < count; i++) within[i] = place[row[rowStart[child] + i]]
      base -= (count * (count + 1)) / 2
      addUpdate(lower, at, pivots, stack, top, within, count, base)
    }
    const failed = eliminateFront(lower, at, pivots + rows, pivots, stack, top, least, pivotStart[f])
    if (failed >= 0) throw new SingularError(order[pivotStart[f] + failed])
    stack.copyWithin(base, top, top + size)
    top = base + size
    open[openCount++] = f
  }
  return { symbolic, lower }
}

/** What each pivot must exceed, by position; 0 of a fixed dof. */
function leastPivots(symbolic: Symbolic, elements: readonly Float64Array[], fixed: Uint8Array): Float64Array {
  const { n, position, cliqueDofStart, cliqueDof } = symbolic
  const least = new Float64Array(n)
  for (let e = 0; e < elements.length; e++) {
    const from = cliqueDofStart[e]
    const size = cliqueDofStart[e + 1] - from
    const matrix = elements[e]
    for (let i = 0; i < size; i++) {
      const dof = cliqueDof[from + i]
      if (!fixed[dof]) least[position[dof]] += LEAST_PIVOT * matrix[i * size + i]
    }
  }
  return least
}

/** Rows of the front where those of element matrix e belong, into `within`; returns how many rows it has. */
function placeElement(symbolic: Symbolic, e: number, fixed: Uint8Array, place: Int32Array, within: Int32Array): number {
  const { position, cliqueDofStart, cliqueDof } = symbolic
  const from = cliqueDofStart[e]
  const count = cliqueDofStart[e + 1] - from
  for (let i = 0; i < count; i++) {
    const dof = cliqueDof[from + i]
    within[i] = fixed[dof] ? -1 : place[position[dof]]
  }
  return count
}

/** Adds an element matrix to the front, in place; rows may stand in any order. */
function addElement(
  lower: Float64Array,
  at: number,
  pivots: number,
  stack: Float64Array,
  top: number,
  within: Int32Array,
  count: number,
  matrix: Float64Array
): void {
  for (let i = 0; i < count; i++) {
    const a = within[i]
    if (a < 0) continue
    for (let j = 0; j <= i; j++) {
      const b = within[j]
      if (b < 0) continue
      const high = a > b ? a : b
      const low = a > b ? b : a
      if (low < pivots) lower[at + high * pivots + low] += matrix[i * count + j]
      else stack[top + ((high - pivots) * (high - pivots + 1)) / 2 + low - pivots] += matrix[i * count + j]
    }
  }
}

/** Adds a child's update (on the stack from `from`) to the front, in place; its rows ascend there too. */
function addUpdate(
  lower: Float64Array,
  at: number,
  pivots: number,
  stack: Float64Array,
  top: number,
  within: Int32Array,
  count: number,
  from: number
): void {
  let inPanel = 0
  while (inPanel < count && within[inPanel] < pivots) inPanel++
  for (let i = 0; i < count; i++) {
    const source = from + (i * (i + 1)) / 2
    const panel = at + within[i] * pivots
    const width = i < inPanel ? i + 1 : inPanel
    for (let j = 0; j < width; j++) lower[panel + within[j]] += stack[source + j]
    if (i < inPanel) continue
    const r = within[i] - pivots
    const target = top + (r * (r + 1)) / 2 - pivots
    for (let j = inPanel; j <= i; j++) stack[target + within[j]] += stack[source + j]
  }
}

/**
 * Solution of A x = b, b untouched. Several right-hand sides stand one after the other, n numbers each, and so do their solutions.
 * @throws RangeError when their length is no multiple of n
 */
export function solveFactor(factor: Factor, b: Float64Array): Float64Array {
  const { n, order } = factor.symbolic
  if (b.length % n !== 0) throw new RangeError(`the right-hand side holds ${b.length} numbers, expected a multiple of ${n}`)
  const x = new Float64Array(b.length)
  const y = new Float64Array(n)
  for (let at = 0; at < b.length; at += n) {
    for (let i = 0; i < n; i++) y[i] = b[at + order[i]]
    solveForward(factor, y)
    solveBackward(factor, y)
    for (let i = 0; i < n; i++) x[at + order[i]] = y[i]
  }
  return x
}

/** In place, by position: y becomes the solution of L z = y. */
function solveForward({ symbolic, lower }: Factor, y: Float64Array): void {
  const { fronts, pivotStart, rowStart, row, lowerStart } = symbolic
  for (let f = 0; f < fronts; f++) {
    const first = pivotStart[f]
    const p = pivotStart[f + 1] - first
    let at = lowerStart[f]
    for (let i = 0; i < p; i++, at += p) {
      let sum = y[first + i]
      for (let k = 0; k < i; k++) sum -= lower[at + k] * y[first + k]
      y[first + i] = sum * lower[at + i]
    }
    for (let r = rowStart[f]; r < rowStart[f + 1]; r++, at += p) {
      let sum = 0
      for (let k = 0; k < p; k++) sum += lower[at + k] * y[first + k]
      y[row[r]] -= sum
    }
  }
}

/** In place, by position: y becomes the solution of L^T z = y. */
function solveBackward({ symbolic, lower }: Factor, y: Float64Array): void {
  const { fronts, pivotStart, rowStart, row, lowerStart } = symbolic
  for (let f = fronts - 1; f >= 0; f--) {
    const first = pivotStart[f]
    const p = pivotStart[f + 1] - first
    let at = lowerStart[f + 1] - p
    for (let r = rowStart[f + 1] - 1; r >= rowStart[f]; r--, at -= p) {
      const known = y[row[r]]
      for (let k = 0; k < p; k++) y[first + k] -= lower[at + k] * known
    }
    for (let i = p - 1; i >= 0; i--, at -= p) {
      const known = y[first + i] * lower[at + i]
      y[first + i] = known
      for (let k = 0; k < i; k++) y[first + k] -= lower[at + k] * known
    }
  }
}

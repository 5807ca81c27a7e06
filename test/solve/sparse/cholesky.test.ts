import fc from 'fast-check'
import { CholeskyDecomposition, Matrix } from 'ml-matrix'
import { describe, expect, it } from 'vitest'
import { analyse, factorise, SingularError, solveFactor, solveRefined, type CliqueGraph } from '../../../src/solve/sparse/index.ts'
import { factoriseFront } from '../../../src/solve/sparse/kernel.ts'
import { assemblyTree } from '../../../src/solve/sparse/ordering.ts'
import { expectNear } from '../../support/near.ts'

/** A deterministic stream of numbers in [0, 1) (D.H. Lehmer's generator, 16807 mod 2^31 - 1). */
function randomStream(seed: number): () => number {
  let state = seed
  return () => {
    state = (state * 16807) % 2147483647
    return state / 2147483647
  }
}

function graphOf(weight: readonly number[], cliques: readonly (readonly number[])[]): CliqueGraph {
  const cliqueStart = [0]
  for (const clique of cliques) cliqueStart.push(cliqueStart[cliqueStart.length - 1] + clique.length)
  return {
    vertices: weight.length,
    weight: Int32Array.from(weight),
    cliqueStart: Int32Array.from(cliqueStart),
    clique: Int32Array.from(cliques.flat())
  }
}

/** Random element matrices M M^T + 0.1 I, so that their sum is positive definite wherever every dof is in a clique. */
function elementsFor(graph: CliqueGraph, random: () => number): Float64Array[] {
  return analyse(graph).cliqueDofs.map(({ length }) => {
    const m = Matrix.from1DArray(length, length, Array.from({ length: length * length }, () => random() - 0.5))
    const a = m.mmul(m.transpose())
    for (let i = 0; i < length; i++) a.set(i, i, a.get(i, i) + 0.1)
    return Float64Array.from(a.to1DArray())
  })
}

/** The dense sum of the element matrices. */
function denseOf(graph: CliqueGraph, elements: readonly Float64Array[]): Matrix {
  const { n, cliqueDofs } = analyse(graph)
  const dense = Matrix.zeros(n, n)
  cliqueDofs.forEach((dofs, e) => {
    dofs.forEach((row, i) => dofs.forEach((column, j) => dense.set(row, column, dense.get(row, column) + elements[e][i * dofs.length + j])))
  })
  return dense
}

/** Triangles of a k x k grid of squares, each with its three nodes. */
function gridCliques(k: number): number[][] {
  const node = (i: number, j: number) => i * (k + 1) + j
  const cliques: number[][] = []
  for (let i = 0; i < k; i++) {
    for (let j = 0; j < k; j++) {
      cliques.push([node(i, j), node(i + 1, j), node(i, j + 1)], [node(i + 1, j), node(i + 1, j + 1), node(i, j + 1)])
    }
  }
  return cliques
}

const patterns: Record<string, CliqueGraph> = {
  'one dof': graphOf([1], [[0]]),
  diagonal: graphOf([2, 1, 3], [[0], [1], [2]]),
  dense: graphOf([2, 2, 2, 2], [[0, 1, 2, 3]]),
  arrow: graphOf([1, 1, 1, 1, 1, 1], [[0, 5], [1, 5], [2, 5], [3, 5], [4, 5]]),
  path: graphOf(Array.from({ length: 20 }, () => 2), Array.from({ length: 19 }, (_, i) => [i, i + 1])),
  'in two pieces': graphOf([1, 2, 1, 2, 3], [[0, 1], [2, 3, 4]]),
  grid: graphOf(Array.from({ length: 49 }, () => 2), gridCliques(6)),
  'blocks of many sizes': graphOf([2, 14, 2, 6, 1], [[0, 1, 2], [2, 3, 4]])
}

/** Entries of L by elimination on the dense pattern in a given order of dofs: the textbook count. */
function naiveCount(graph: CliqueGraph, order: readonly number[]): number {
  const { n, cliqueDofs } = analyse(graph)
  const place = new Int32Array(n)
  order.forEach((dof, i) => (place[dof] = i))
  const filled = Array.from({ length: n }, () => new Set<number>())
  for (const dofs of cliqueDofs) {
    for (const a of dofs) for (const b of dofs) if (place[a] > place[b]) filled[place[b]].add(place[a])
  }
  let count = n
  for (let j = 0; j < n; j++) {
    const rows = [...filled[j]].toSorted((a, b) => a - b)
    count += rows.length
    if (rows.length > 0) for (const i of rows.slice(1)) filled[rows[0]].add(i)
  }
  return count
}

describe('ordering', () => {
  for (const [name, graph] of Object.entries(patterns)) {
    it(`${name}: every block is eliminated once, children before parents, every clique assembled once`, () => {
      const fronts = assemblyTree(graph)
      expect(fronts.flatMap(({ pivots }) => [...pivots]).toSorted((a, b) => a - b)).toEqual(Array.from({ length: graph.vertices }, (_, v) => v))
      expect(fronts.flatMap(({ cliques }) => cliques).toSorted((a, b) => a - b)).toEqual(Array.from({ length: graph.cliqueStart.length - 1 }, (_, e) => e))
      fronts.forEach(({ children }, f) => children.forEach((child) => expect(child).toBeLessThan(f)))
      const { n, frontDofs, pivotCount, nnzL } = analyse(graph)
      const order = frontDofs.flatMap((dofs, f) => [...dofs.subarray(0, pivotCount[f])])
      expect(order.length).toBe(n)
      expect(nnzL).toBe(naiveCount(graph, order))
    })
  }

  it('fills a grid no more than a nested dissection would within a factor', () => {
    // n log2 n times 31/4 bounds the fill of nested dissection on a square grid (A. George, SIAM J. Numer. Anal. 10 (1973) 345)
    const k = 40
    const graph = graphOf(Array.from({ length: (k + 1) ** 2 }, () => 1), gridCliques(k))
    const n = (k + 1) ** 2
    expect(analyse(graph).nnzL).toBeLessThan(7.75 * n * Math.log2(Math.sqrt(n)))
  })
})

describe('factorisation', () => {
  for (const [name, graph] of Object.entries(patterns)) {
    it(`${name}: solves like a dense Cholesky`, () => {
      const random = randomStream(11)
      const elements = elementsFor(graph, random)
      const symbolic = analyse(graph)
      const none = new Uint8Array(symbolic.n)
      const load = Float64Array.from({ length: symbolic.n }, () => random() - 0.5)
      const dense = new CholeskyDecomposition(denseOf(graph, elements)).solve(Matrix.columnVector(load)).to1DArray()
      const factor = factorise(symbolic, elements, none)
      solveFactor(factor, load).forEach((x, i) => expectNear(x, dense[i], { rel: 1e-9, abs: 1e-10, because: 'both stable' }))
      const { x, residual } = solveRefined(symbolic, elements, none, factor, load)
      x.forEach((value, i) => expectNear(value, dense[i], { rel: 1e-9, abs: 1e-10, because: 'refined' }))
      expect(residual).toBeLessThan(1e-15)
    })
  }

  it('solves random sums of cliques', () => {
    const clique = fc.uniqueArray(fc.integer({ min: 0, max: 14 }), { minLength: 1, maxLength: 6 })
    fc.assert(
      fc.property(fc.array(clique, { minLength: 1, maxLength: 25 }), fc.array(fc.integer({ min: 1, max: 4 }), { minLength: 15, maxLength: 15 }), (cliques, weight) => {
        // every block belongs to some clique
        const graph = graphOf(weight, [...cliques, ...weight.map((_, v) => [v])])
        const symbolic = analyse(graph)
        const random = randomStream(cliques.length + 1)
        const elements = elementsFor(graph, random)
        const load = Float64Array.from({ length: symbolic.n }, () => random() - 0.5)
        const dense = new CholeskyDecomposition(denseOf(graph, elements)).solve(Matrix.columnVector(load)).to1DArray()
        const x = solveFactor(factorise(symbolic, elements, new Uint8Array(symbolic.n)), load)
        x.forEach((value, i) => expectNear(value, dense[i], { rel: 1e-9, abs: 1e-9, because: 'dense oracle' }))
      }),
      { seed: 5, numRuns: 80 }
    )
  })

  it('holds fixed dofs at zero and solves the rest as if they were not there', () => {
    const graph = patterns.grid
    const random = randomStream(7)
    const elements = elementsFor(graph, random)
    const symbolic = analyse(graph)
    const fixed = new Uint8Array(symbolic.n)
    for (const dof of [0, 1, 13, 60]) fixed[dof] = 1
    const load = Float64Array.from({ length: symbolic.n }, () => random() - 0.5)
    const { x } = solveRefined(symbolic, elements, fixed, factorise(symbolic, elements, fixed), load)
    const free = Array.from({ length: symbolic.n }, (_, i) => i).filter((i) => !fixed[i])
    const dense = denseOf(graph, elements).selection(free, free)
    const expected = new CholeskyDecomposition(dense).solve(Matrix.columnVector(free.map((i) => load[i]))).to1DArray()
    free.forEach((dof, i) => expectNear(x[dof], expected[i], { rel: 1e-9, abs: 1e-10, because: 'dense oracle' }))
    fixed.forEach((held, dof) => held && expect(x[dof]).toBe(0))
  })

  it('names the dof of a zero pivot', () => {
    const graph = graphOf([1, 1, 1], [[0, 1], [1, 2]])
    // two springs in a row, held nowhere
    const spring = Float64Array.of(1, -1, -1, 1)
    expect(() => factorise(analyse(graph), [spring, spring], new Uint8Array(3))).toThrow(SingularError)
    const fixed = Uint8Array.of(1, 0, 0)
    const factor = factorise(analyse(graph), [spring, spring], fixed)
    solveFactor(factor, Float64Array.of(0, 0, 1)).forEach((x, i) => expectNear(x, i, { abs: 1e-14, because: 'unit springs in a row' }))
  })

  it('gives identical bits on every run', () => {
    const elements = elementsFor(patterns.grid, randomStream(3))
    const symbolic = analyse(patterns.grid)
    const load = Float64Array.from({ length: symbolic.n }, (_, i) => Math.cos(i))
    const none = new Uint8Array(symbolic.n)
    const [a, b] = [0, 1].map(() => solveFactor(factorise(analyse(patterns.grid), elements, none), load))
    expect(a).toEqual(b)
  })
})

describe('kernel', () => {
  it('eliminates some columns of a front and leaves the Schur complement, for odd and even sizes', () => {
    for (const [n, pivots] of [[1, 1], [5, 2], [6, 3], [9, 9], [12, 5], [13, 4]]) {
      const random = randomStream(n * 31 + pivots)
      const m = Matrix.from1DArray(n, n, Array.from({ length: n * n }, () => random() - 0.5))
      const a = m.mmul(m.transpose()).add(Matrix.eye(n, n))
      const front = Float64Array.from(a.to1DArray())
      expect(factoriseFront(front, n, pivots, new Float64Array(pivots))).toBe(-1)
      const l = new CholeskyDecomposition(a.subMatrix(0, pivots - 1, 0, pivots - 1)).lowerTriangularMatrix
      for (let i = 0; i < pivots; i++) for (let j = 0; j <= i; j++) expectNear(front[i * n + j], l.get(i, j), { abs: 1e-13, because: 'Cholesky of the leading block' })
      for (let i = pivots; i < n; i++) {
        for (let j = pivots; j <= i; j++) {
          let schur = a.get(i, j)
          for (let k = 0; k < pivots; k++) schur -= front[i * n + k] * front[j * n + k]
          // front[i][k] = (A L^-T)[i][k]: check through the identity A_ij = sum L_ik L_jk + S_ij
          expectNear(front[i * n + j], schur, { abs: 1e-13, because: 'Schur complement' })
        }
      }
    }
  })
})

// Patterns and matrices for tests of the sparse solver, and the textbook's dense answers.

import { Matrix } from 'ml-matrix'
import type { CliqueGraph } from '../../../src/solve/sparse/graph.ts'
import type { Factor } from '../../../src/solve/sparse/index.ts'
import { analyse } from '../../../src/solve/sparse/symbolic.ts'

/** A deterministic stream of numbers in [0, 1) (D.H. Lehmer's generator, 16807 mod 2^31 - 1). */
export function randomStream(seed: number): () => number {
  let state = seed
  return () => {
    state = (state * 16807) % 2147483647
    return state / 2147483647
  }
}

/** The graph of blocks with these numbers of dofs and these cliques of blocks. */
export function graphOf(weight: readonly number[], cliques: readonly (readonly number[])[]): CliqueGraph {
  const cliqueStart = [0]
  for (const clique of cliques) cliqueStart.push(cliqueStart[cliqueStart.length - 1] + clique.length)
  return {
    vertices: weight.length,
    weight: Int32Array.from(weight),
    cliqueStart: Int32Array.from(cliqueStart),
    clique: Int32Array.from(cliques.flat())
  }
}

/** A k x k grid of squares in two triangles each: nodes of 2 dofs and, where `perSide` > 0, sides of so many. */
export function triangleGrid(k: number, perNode: number, perSide = 0): CliqueGraph {
  const node = (i: number, j: number) => i * (k + 1) + j
  const nodes = (k + 1) ** 2
  const sides = new Map<string, number>()
  const side = (a: number, b: number): number => {
    const name = a < b ? `${a} ${b}` : `${b} ${a}`
    if (!sides.has(name)) sides.set(name, nodes + sides.size)
    return sides.get(name)!
  }
  const cliques: number[][] = []
  for (let i = 0; i < k; i++) {
    for (let j = 0; j < k; j++) {
      for (const [a, b, c] of [[node(i, j), node(i + 1, j), node(i, j + 1)], [node(i + 1, j), node(i + 1, j + 1), node(i, j + 1)]]) {
        cliques.push(perSide > 0 ? [a, b, c, side(a, b), side(b, c), side(c, a)] : [a, b, c])
      }
    }
  }
  return graphOf([...Array.from({ length: nodes }, () => perNode), ...Array.from({ length: sides.size }, () => perSide)], cliques)
}

export const patterns: Record<string, CliqueGraph> = {
  'one dof': graphOf([1], [[0]]),
  diagonal: graphOf([2, 1, 3], [[0], [1], [2]]),
  dense: graphOf([2, 2, 2, 2], [[0, 1, 2, 3]]),
  'the same clique twice': graphOf([1, 2, 1], [[0, 1, 2], [2, 0, 1]]),
  arrow: graphOf([1, 1, 1, 1, 1, 1], [[0, 5], [1, 5], [2, 5], [3, 5], [4, 5]]),
  path: graphOf(Array.from({ length: 20 }, () => 2), Array.from({ length: 19 }, (_, i) => [i, i + 1])),
  ring: graphOf(Array.from({ length: 17 }, () => 1), Array.from({ length: 17 }, (_, i) => [i, (i + 1) % 17])),
  'in two pieces': graphOf([1, 2, 1, 2, 3], [[0, 1], [2, 3, 4]]),
  grid: triangleGrid(6, 2),
  'grid with sides': triangleGrid(4, 2, 6),
  'blocks of many sizes': graphOf([2, 14, 2, 6, 1], [[0, 1, 2], [2, 3, 4]])
}

/** Dofs of each clique in its own order of blocks, from the definition. */
export function dofsOfCliques({ weight, cliqueStart, clique }: CliqueGraph): number[][] {
  const start = [0]
  for (const w of weight) start.push(start[start.length - 1] + w)
  return Array.from({ length: cliqueStart.length - 1 }, (_, e) =>
    [...clique.subarray(cliqueStart[e], cliqueStart[e + 1])].flatMap((v) => Array.from({ length: weight[v] }, (_, k) => start[v] + k))
  )
}

/** Random element matrices M M^T + 0.1 I, so that their sum is positive definite wherever every dof is in a clique. */
export function elementsFor(graph: CliqueGraph, random: () => number): Float64Array[] {
  return dofsOfCliques(graph).map(({ length }) => {
    const m = Matrix.from1DArray(length, length, Array.from({ length: length * length }, () => random() - 0.5))
    const a = m.mmul(m.transpose())
    for (let i = 0; i < length; i++) a.set(i, i, a.get(i, i) + 0.1)
    return Float64Array.from(a.to1DArray())
  })
}

/** The dense sum of the element matrices. */
export function denseOf(graph: CliqueGraph, elements: readonly Float64Array[]): Matrix {
  const n = graph.weight.reduce((sum, w) => sum + w, 0)
  const dense = Matrix.zeros(n, n)
  dofsOfCliques(graph).forEach((dofs, e) => {
    dofs.forEach((row, i) => dofs.forEach((column, j) => dense.set(row, column, dense.get(row, column) + elements[e][i * dofs.length + j])))
  })
  return dense
}

/** L of the factor as a dense matrix, rows and columns by position. */
export function denseLower({ symbolic, lower }: Factor): Matrix {
  const { n, fronts, pivotStart, rowStart, row, lowerStart } = symbolic
  const dense = Matrix.zeros(n, n)
  for (let f = 0; f < fronts; f++) {
    const p = pivotStart[f + 1] - pivotStart[f]
    for (let i = 0; i < p; i++) {
      for (let k = 0; k < i; k++) dense.set(pivotStart[f] + i, pivotStart[f] + k, lower[lowerStart[f] + i * p + k])
      dense.set(pivotStart[f] + i, pivotStart[f] + i, 1 / lower[lowerStart[f] + i * p + i])
    }
    for (let i = 0; i < rowStart[f + 1] - rowStart[f]; i++) {
      for (let k = 0; k < p; k++) dense.set(row[rowStart[f] + i], pivotStart[f] + k, lower[lowerStart[f] + (p + i) * p + k])
    }
  }
  return dense
}

/** Rows of each column of L below the diagonal, by position: elimination on sets, the textbook way. The dofs of a block all couple. */
export function naiveFill(graph: CliqueGraph, position: Int32Array): Set<number>[] {
  const filled = Array.from(position, () => new Set<number>())
  const blocks = graphOf([...graph.weight], [...graph.weight.keys()].map((v) => [v]))
  for (const dofs of [...dofsOfCliques(graph), ...dofsOfCliques(blocks)]) {
    for (const a of dofs) for (const b of dofs) if (position[a] > position[b]) filled[position[b]].add(position[a])
  }
  for (const column of filled) {
    const rows = [...column].toSorted((a, b) => a - b)
    for (const i of rows.slice(1)) filled[rows[0]].add(i)
  }
  return filled
}

/** Position of each dof when blocks are eliminated in this order. */
export function positionsOf(graph: CliqueGraph, order: Int32Array): Int32Array {
  return analyse(graph, order).position
}

/** The largest |a - b| over rows and columns; NaN when any entry is. */
export function largestDifference(a: Matrix, b: Matrix): number {
  return a.clone().sub(b).to1DArray().reduce((largest, d) => (Math.abs(d) <= largest ? largest : Math.abs(d)), 0)
}

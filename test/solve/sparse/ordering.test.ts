import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { CliqueGraph } from '../../../src/solve/sparse/graph.ts'
import { orderMinimumDegree } from '../../../src/solve/sparse/ordering.ts'
import { analyse } from '../../../src/solve/sparse/symbolic.ts'
import { graphOf, naiveFill, patterns, positionsOf, randomStream, triangleGrid } from './patterns.ts'

const numbersTo = (count: number): number[] => Array.from({ length: count }, (_, i) => i)

function fillOf(graph: CliqueGraph, order: Int32Array): number {
  return naiveFill(graph, positionsOf(graph, order)).reduce((sum, { size }) => sum + size, 0)
}

/** Nested dissection of the nodes of a k x k grid: both halves first, then the line between them. */
function dissectGrid(k: number): Int32Array {
  const order: number[] = []
  const dissect = (i0: number, i1: number, j0: number, j1: number): void => {
    if (i0 > i1 || j0 > j1) return
    if (i1 - i0 >= j1 - j0) {
      const middle = (i0 + i1) >> 1
      dissect(i0, middle - 1, j0, j1)
      dissect(middle + 1, i1, j0, j1)
      for (let j = j0; j <= j1; j++) order.push(middle * (k + 1) + j)
      return
    }
    const middle = (j0 + j1) >> 1
    dissect(i0, i1, j0, middle - 1)
    dissect(i0, i1, middle + 1, j1)
    for (let i = i0; i <= i1; i++) order.push(i * (k + 1) + middle)
  }
  dissect(0, k, 0, k)
  return Int32Array.from(order)
}

/** Entries below the diagonal that minimum degree leaves with exact degrees, the lowest number first among equals. */
function exactMinimumDegreeFill(count: number, pairs: readonly number[][]): number {
  const neighbours = Array.from({ length: count }, () => new Set<number>())
  for (const [a, b] of pairs) {
    neighbours[a].add(b)
    neighbours[b].add(a)
  }
  const left = new Set(numbersTo(count))
  let fill = 0
  while (left.size > 0) {
    const pivot = [...left].reduce((best, v) => (neighbours[v].size < neighbours[best].size ? v : best))
    left.delete(pivot)
    fill += neighbours[pivot].size
    for (const a of neighbours[pivot]) {
      neighbours[a].delete(pivot)
      for (const b of neighbours[pivot]) if (a !== b) neighbours[a].add(b)
    }
  }
  return fill
}

describe('minimum degree', () => {
  for (const [name, graph] of Object.entries(patterns)) {
    it(`${name}: every block once`, () => {
      expect([...orderMinimumDegree(graph)].toSorted((a, b) => a - b)).toEqual(numbersTo(graph.vertices))
    })
  }

  it('orders any sum of cliques, blocks that no clique has among them', () => {
    const clique = fc.uniqueArray(fc.integer({ min: 0, max: 39 }), { minLength: 1, maxLength: 9 })
    const weights = fc.array(fc.integer({ min: 1, max: 5 }), { minLength: 40, maxLength: 40 })
    fc.assert(
      fc.property(fc.array(clique, { maxLength: 60 }), weights, (cliques, weight) => {
        const order = orderMinimumDegree(graphOf(weight, cliques))
        expect([...order].toSorted((a, b) => a - b)).toEqual(numbersTo(40))
      }),
      { seed: 3, numRuns: 300 }
    )
  })

  it('makes no fill where none is needed: paths, trees and arrows', () => {
    const tree = graphOf(Array.from({ length: 40 }, () => 1), Array.from({ length: 39 }, (_, i) => [i + 1, i >> 1]))
    for (const [graph, edges] of [[patterns.arrow, 5], [tree, 39]] as const) expect(fillOf(graph, orderMinimumDegree(graph))).toBe(edges)
    // a path of blocks of 2: each couples 2 x 2 with the next and once within itself
    expect(fillOf(patterns.path, orderMinimumDegree(patterns.path))).toBe(19 * 4 + 20)
  })

  it('closes a ring with the least fill: one chord a vertex but three', () => {
    expect(fillOf(patterns.ring, orderMinimumDegree(patterns.ring))).toBe(17 + 17 - 3)
  })

  it('counts dofs, not blocks', () => {
    // block 0 has two neighbours of 25 dofs, block 1 three of 1 dof
    const graph = graphOf([1, 9, 25, 25, 1, 1, 1], [[0, 2], [0, 3], [2, 3], [1, 4], [1, 5], [1, 6], [4, 5, 6]])
    expect(orderMinimumDegree(graph)[0]).toBe(1)
  })

  it('fills a grid no more than nested dissection does, by a tenth at most', () => {
    // nested dissection is asymptotically the best there is (A. George, SIAM J. Numer. Anal. 10 (1973) 345), so no worse growth
    for (const k of [20, 40, 80]) {
      const graph = triangleGrid(k, 1)
      const best = analyse(graph, dissectGrid(k))
      const { nnzL, flops } = analyse(graph)
      expect(nnzL).toBeLessThan(1.1 * best.nnzL)
      expect(flops).toBeLessThan(1.2 * best.flops) // columns squared: twice the excess
    }
  })

  it('fills networks of long-range couplings little more than exact minimum degree does', () => {
    // their elements outgrow the list they began with many times over
    let ours = 0
    let exact = 0
    for (let seed = 1; seed <= 10; seed++) {
      const random = randomStream(seed)
      const pairs = Array.from({ length: 300 }, () => [Math.floor(100 * random()), Math.floor(100 * random())]).filter(([a, b]) => a !== b)
      const graph = graphOf(Array.from({ length: 100 }, () => 1), pairs)
      ours += fillOf(graph, orderMinimumDegree(graph))
      exact += exactMinimumDegreeFill(100, pairs)
    }
    expect(ours).toBeLessThan(1.05 * exact) // approximate degrees and other ties
  })

  it('gives the same order every time', () => {
    for (const graph of Object.values(patterns)) expect(orderMinimumDegree(graph)).toEqual(orderMinimumDegree(graph))
  })
})

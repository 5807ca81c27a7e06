import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { CliqueGraph } from '../../../src/solve/sparse/graph.ts'
import { analyse } from '../../../src/solve/sparse/symbolic.ts'
import { dofsOfCliques, graphOf, naiveFill, patterns, randomStream } from './patterns.ts'

/** A random permutation of 0 .. count - 1 (R.A. Fisher, F. Yates, 1938). */
function shuffled(count: number, random: () => number): Int32Array {
  const order = Int32Array.from({ length: count }, (_, i) => i)
  for (let i = count - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1))
    const kept = order[i]
    order[i] = order[j]
    order[j] = kept
  }
  return order
}

interface Tree {
  readonly update: number
  readonly children: readonly Tree[]
}

/** Most entries of updates alive at a time in the subtree of a front, siblings in the order given. */
function stackOf({ update, children }: Tree): number {
  let waiting = 0
  let peak = 0
  for (const child of children) {
    peak = Math.max(peak, waiting + stackOf(child))
    waiting += child.update
  }
  return Math.max(peak, waiting + update)
}

/** The least that this can be, over all orders of siblings: the best order of every subset of them, from the empty one on. */
function leastStackOf({ update, children }: Tree): number {
  const peaks = children.map(leastStackOf)
  const waiting = new Float64Array(2 ** children.length)
  const least = new Float64Array(2 ** children.length).fill(Infinity)
  least[0] = 0
  for (let done = 0; done < least.length; done++) {
    children.forEach((child, c) => {
      const next = done | (1 << c)
      if (next === done) return
      waiting[next] = waiting[done] + child.update
      least[next] = Math.min(least[next], Math.max(least[done], waiting[done] + peaks[c]))
    })
  }
  return Math.max(least[least.length - 1], waiting[least.length - 1] + update)
}

/** The fronts as trees; a root's update is empty. */
function treesOf({ fronts, rowStart, children }: ReturnType<typeof analyse>): Tree[] {
  const pending: Tree[] = []
  for (let f = 0; f < fronts; f++) {
    const rows = rowStart[f + 1] - rowStart[f]
    pending.push({ update: (rows * (rows + 1)) / 2, children: children[f] > 0 ? pending.splice(-children[f]) : [] })
  }
  return pending
}

/** All that must hold of an analysis, against elimination on sets. */
function expectSound(graph: CliqueGraph, symbolic: ReturnType<typeof analyse>): void {
  const { n, order, position, fronts, pivotStart, rowStart, row, children, lowerStart } = symbolic
  const { frontCliqueStart, frontClique, cliqueDofStart, cliqueDof } = symbolic
  expect([...order].toSorted((a, b) => a - b)).toEqual(Array.from({ length: n }, (_, i) => i))
  order.forEach((dof, at) => expect(position[dof]).toBe(at))
  expect(pivotStart[fronts]).toBe(n)
  dofsOfCliques(graph).forEach((dofs, e) => expect([...cliqueDof.subarray(cliqueDofStart[e], cliqueDofStart[e + 1])]).toEqual(dofs))

  // exact counts, and a front holds at least the rows of every column of its pivots
  const fill = naiveFill(graph, position)
  expect(symbolic.nnzL).toBe(n + fill.reduce((sum, { size }) => sum + size, 0))
  expect(symbolic.flops).toBe(fill.reduce((sum, { size }) => sum + (size + 1) ** 2, 0))
  const pending: number[] = []
  for (let f = 0; f < fronts; f++) {
    const pivots = Array.from({ length: pivotStart[f + 1] - pivotStart[f] }, (_, i) => pivotStart[f] + i)
    const rows = [...row.subarray(rowStart[f], rowStart[f + 1])]
    expect(rows).toEqual([...new Set(rows)].toSorted((a, b) => a - b))
    if (rows.length > 0) expect(rows[0]).toBeGreaterThanOrEqual(pivotStart[f + 1])
    const held = new Set([...pivots, ...rows])
    for (const p of pivots) for (const r of fill[p]) expect(held.has(r)).toBe(true)
    expect(lowerStart[f + 1] - lowerStart[f]).toBe(held.size * pivots.length)
    // what children and cliques bring finds its place
    for (let k = 0; k < children[f]; k++) {
      const child = pending.pop()!
      for (const r of row.subarray(rowStart[child], rowStart[child + 1])) expect(held.has(r)).toBe(true)
    }
    if (rows.length > 0) pending.push(f)
    for (const e of frontClique.subarray(frontCliqueStart[f], frontCliqueStart[f + 1])) {
      for (const dof of cliqueDof.subarray(cliqueDofStart[e], cliqueDofStart[e + 1])) expect(held.has(position[dof])).toBe(true)
    }
  }
  expect(pending).toEqual([])
  expect(symbolic.stackSize).toBe(Math.max(0, ...treesOf(symbolic).map(stackOf)))
  expect([...frontClique].toSorted((a, b) => a - b)).toEqual(Array.from({ length: graph.cliqueStart.length - 1 }, (_, e) => e))
}

describe('symbolic factorisation', () => {
  for (const [name, graph] of Object.entries(patterns)) {
    it(`${name}: counts and fronts agree with elimination on sets, in minimum degree and in any order`, () => {
      expectSound(graph, analyse(graph))
      expectSound(graph, analyse(graph, Int32Array.from({ length: graph.vertices }, (_, v) => v)))
      for (let seed = 1; seed <= 3; seed++) expectSound(graph, analyse(graph, shuffled(graph.vertices, randomStream(seed))))
    })
  }

  it('is sound for random cliques in random orders', () => {
    const clique = fc.uniqueArray(fc.integer({ min: 0, max: 17 }), { minLength: 1, maxLength: 5 })
    const weights = fc.array(fc.integer({ min: 1, max: 4 }), { minLength: 18, maxLength: 18 })
    fc.assert(
      fc.property(fc.array(clique, { maxLength: 30 }), weights, fc.integer({ min: 1, max: 1e6 }), (cliques, weight, seed) => {
        const graph = graphOf(weight, cliques)
        expectSound(graph, analyse(graph))
        expectSound(graph, analyse(graph, shuffled(18, randomStream(seed))))
      }),
      { seed: 8, numRuns: 100 }
    )
  })

  it('works siblings off in the order that keeps the stack smallest', () => {
    for (let seed = 1; seed <= 40; seed++) {
      const random = randomStream(seed)
      // a tree of three branches a block, the blocks of many sizes, so that updates and the room that they need differ
      const weight = Array.from({ length: 22 }, () => 1 + Math.floor(40 * random()))
      const graph = graphOf(weight, weight.slice(1).map((_, i) => [i + 1, Math.floor(i / 3)]))
      const symbolic = analyse(graph)
      expect(symbolic.stackSize).toBe(Math.max(0, ...treesOf(symbolic).map(leastStackOf)))
    }
  })

  it('merges a chain of small fronts: a path needs fewer fronts than blocks', () => {
    expect(analyse(patterns.path).fronts).toBeLessThan(10)
  })

  it('gathers a dense matrix in one front', () => {
    const { fronts, nnzL, stackSize } = analyse(patterns.dense)
    expect([fronts, nnzL, stackSize]).toEqual([1, 36, 0])
  })
})

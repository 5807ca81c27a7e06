import fc from 'fast-check'
import { CholeskyDecomposition, Matrix } from 'ml-matrix'
import { describe, expect, it } from 'vitest'
import type { CliqueGraph } from '../../../src/solve/sparse/graph.ts'
import { analyse, factorise, SingularError, solveFactor } from '../../../src/solve/sparse/index.ts'
import { expectNear } from '../../support/near.ts'
import { denseLower, denseOf, elementsFor, graphOf, largestDifference, patterns, randomStream, triangleGrid } from './patterns.ts'

const randomLoad = (n: number, random: () => number): Float64Array => Float64Array.from({ length: n }, () => random() - 0.5)

/** Unit springs between all blocks of each clique (one dof a block): singular until one dof of each piece is held. */
function springs({ cliqueStart }: CliqueGraph): Float64Array[] {
  return Array.from({ length: cliqueStart.length - 1 }, (_, e) => {
    const n = cliqueStart[e + 1] - cliqueStart[e]
    return Float64Array.from({ length: n * n }, (_, k) => (k % (n + 1) === 0 ? n - 1 : -1))
  })
}

function singularDof(run: () => unknown): number {
  try {
    run()
  } catch (error) {
    if (error instanceof SingularError) return error.dof
    throw error
  }
  throw new Error('expected a SingularError')
}

describe('factorisation', () => {
  for (const [name, graph] of Object.entries(patterns)) {
    it(`${name}: L L^T = P A P^T, and the solution is that of a dense Cholesky`, () => {
      const random = randomStream(11)
      const elements = elementsFor(graph, random)
      const symbolic = analyse(graph)
      const factor = factorise(symbolic, elements, new Uint8Array(symbolic.n))
      const a = denseOf(graph, elements)
      const l = denseLower(factor)
      const permuted = a.selection([...symbolic.order], [...symbolic.order])
      const off = largestDifference(l.mmul(l.transpose()), permuted)
      expectNear(off, 0, { abs: 1e-14 * a.max(), because: 'backward stable: some eps times the largest entry' })
      const load = randomLoad(symbolic.n, random)
      const dense = new CholeskyDecomposition(a).solve(Matrix.columnVector(load)).to1DArray()
      solveFactor(factor, load).forEach((x, i) => expectNear(x, dense[i], { rel: 1e-9, abs: 1e-10, because: 'both stable' }))
    })
  }

  it('solves random sums of cliques, some dofs fixed', () => {
    const clique = fc.uniqueArray(fc.integer({ min: 0, max: 14 }), { minLength: 1, maxLength: 6 })
    const seeds = fc.integer({ min: 1, max: 1e6 })
    const weights = fc.array(fc.integer({ min: 1, max: 4 }), { minLength: 15, maxLength: 15 })
    fc.assert(
      fc.property(fc.array(clique, { minLength: 1, maxLength: 25 }), weights, seeds, (cliques, weight, seed) => {
        // every block belongs to some clique
        const graph = graphOf(weight, [...cliques, ...weight.map((_, v) => [v])])
        const random = randomStream(seed)
        const elements = elementsFor(graph, random)
        const symbolic = analyse(graph)
        const fixed = Uint8Array.from({ length: symbolic.n }, () => (random() < 0.2 ? 1 : 0))
        const load = randomLoad(symbolic.n, random).map((force, dof) => (fixed[dof] ? 0 : force))
        const x = solveFactor(factorise(symbolic, elements, fixed), load)
        const free = [...fixed.keys()].filter((dof) => !fixed[dof])
        const dense = new CholeskyDecomposition(denseOf(graph, elements).selection(free, free))
          .solve(Matrix.columnVector(free.map((dof) => load[dof])))
          .to1DArray()
        free.forEach((dof, i) => expectNear(x[dof], dense[i], { rel: 1e-9, abs: 1e-9, because: 'dense oracle' }))
        fixed.forEach((held, dof) => held && expect(x[dof]).toBe(0))
      }),
      { seed: 5, numRuns: 80 }
    )
  })

  it('gives a fixed dof its right-hand side, and the others a solution without it', () => {
    const graph = patterns.path
    const elements = elementsFor(graph, randomStream(2))
    const symbolic = analyse(graph)
    const fixed = new Uint8Array(symbolic.n)
    fixed[5] = 1
    const load = new Float64Array(symbolic.n)
    load[5] = 3
    expect([...solveFactor(factorise(symbolic, elements, fixed), load)]).toEqual([...load])
  })

  it('solves several right-hand sides as one by one', () => {
    const graph = patterns['grid with sides']
    const random = randomStream(9)
    const symbolic = analyse(graph)
    const factor = factorise(symbolic, elementsFor(graph, random), new Uint8Array(symbolic.n))
    const loads = randomLoad(3 * symbolic.n, random)
    const kept = loads.slice()
    const together = solveFactor(factor, loads)
    for (let k = 0; k < 3; k++) {
      const part = [k * symbolic.n, (k + 1) * symbolic.n] as const
      expect(together.slice(...part)).toEqual(solveFactor(factor, loads.slice(...part)))
    }
    expect(loads).toEqual(kept)
    expect(() => solveFactor(factor, new Float64Array(symbolic.n + 1))).toThrow(RangeError)
  })

  it('serves many matrices of one pattern, in any order of elimination', () => {
    const graph = patterns.grid
    const symbolic = analyse(graph)
    const other = analyse(graph, Int32Array.from({ length: graph.vertices }, (_, v) => v))
    for (let seed = 1; seed <= 3; seed++) {
      const random = randomStream(seed)
      const elements = elementsFor(graph, random)
      const load = randomLoad(symbolic.n, random)
      const none = new Uint8Array(symbolic.n)
      const x = solveFactor(factorise(other, elements, none), load)
      solveFactor(factorise(symbolic, elements, none), load).forEach((value, i) => expectNear(value, x[i], { abs: 1e-11, because: 'same matrix' }))
    }
  })

  it('solves springs in a row by hand', () => {
    const graph = graphOf([1, 1, 1], [[0, 1], [1, 2]])
    const factor = factorise(analyse(graph), springs(graph), Uint8Array.of(1, 0, 0))
    solveFactor(factor, Float64Array.of(0, 0, 1)).forEach((x, i) => expectNear(x, i, { abs: 1e-14, because: 'unit springs in a row' }))
  })

  it('names a dof of the piece that nothing holds', () => {
    const graph = graphOf([1, 1, 1, 1, 1], [[0, 1], [1, 2], [3, 4]])
    const symbolic = analyse(graph)
    expect(singularDof(() => factorise(symbolic, springs(graph), Uint8Array.of(1, 0, 0, 0, 0)))).toBeGreaterThanOrEqual(3)
    expect(singularDof(() => factorise(symbolic, springs(graph), Uint8Array.of(0, 0, 0, 0, 1)))).toBeLessThan(3)
    // a dof of no element, and one with a negative diagonal
    expect(singularDof(() => factorise(analyse(graphOf([1, 1], [[0]])), [Float64Array.of(1)], new Uint8Array(2)))).toBe(1)
    expect(singularDof(() => factorise(analyse(patterns['one dof']), [Float64Array.of(-1)], new Uint8Array(1)))).toBe(0)
  })

  it('finds that a large net of springs floats, and solves it once a node is held', () => {
    const graph = triangleGrid(60, 1)
    const symbolic = analyse(graph)
    const fixed = new Uint8Array(symbolic.n)
    expect(() => factorise(symbolic, springs(graph), fixed)).toThrow(SingularError)
    fixed[0] = 1
    const factor = factorise(symbolic, springs(graph), fixed)
    const load = new Float64Array(symbolic.n)
    load[symbolic.n - 1] = 1
    const x = solveFactor(factor, load)
    // the node in the corner hangs on two springs; equilibrium there: 2 x - x_a - x_b = 1
    const [corner, a, b] = [symbolic.n - 1, symbolic.n - 2, symbolic.n - 62].map((dof) => x[dof])
    expectNear(2 * corner - a - b, 1, { abs: 1e-12, because: 'equilibrium of the corner' })
  })

  it('finds that a net floats where rounding hides it: springs of any stiffness', () => {
    // some of the last pivots come out as small positive numbers, which is what the threshold is for
    const graph = triangleGrid(12, 1)
    const symbolic = analyse(graph)
    for (let seed = 1; seed <= 20; seed++) {
      const random = randomStream(seed)
      const elements = springs(graph).map((matrix) => {
        const stiffness = random() + 0.1
        return matrix.map((entry) => entry * stiffness)
      })
      expect(() => factorise(symbolic, elements, new Uint8Array(symbolic.n))).toThrow(SingularError)
    }
  })

  it('takes any unit of stiffness, fixed dofs among them', () => {
    const graph = patterns.path
    const symbolic = analyse(graph)
    const elements = elementsFor(graph, randomStream(4))
    const fixed = new Uint8Array(symbolic.n)
    fixed[3] = 1
    const load = Float64Array.from({ length: symbolic.n }, (_, i) => (i === 3 ? 0 : 1))
    const x = solveFactor(factorise(symbolic, elements, fixed), load)
    for (const unit of [2 ** -60, 2 ** 60]) {
      const scaled = solveFactor(factorise(symbolic, elements.map((matrix) => matrix.map((entry) => entry * unit)), fixed), load)
      // powers of 4 pass through square roots exactly
      expect(scaled.map((value) => value * unit)).toEqual(x)
    }
  })

  it('gives identical bits on every run', () => {
    const elements = elementsFor(patterns.grid, randomStream(3))
    const none = new Uint8Array(98)
    const load = Float64Array.from({ length: 98 }, (_, i) => Math.cos(i))
    const [a, b] = [0, 1].map(() => solveFactor(factorise(analyse(patterns.grid), elements, none), load))
    expect(a).toEqual(b)
  })
})

import { CholeskyDecomposition, Matrix } from 'ml-matrix'
import { describe, expect, it } from 'vitest'
import { analyse, factorise, solveRefined } from '../../../src/solve/sparse/index.ts'
import { expectNear } from '../../support/near.ts'
import { denseOf, elementsFor, patterns, randomStream } from './patterns.ts'

describe('iterative refinement', () => {
  for (const [name, graph] of Object.entries(patterns)) {
    it(`${name}: the residual falls to rounding and the solution is the dense one`, () => {
      const random = randomStream(11)
      const elements = elementsFor(graph, random)
      const symbolic = analyse(graph)
      const none = new Uint8Array(symbolic.n)
      const load = Float64Array.from({ length: symbolic.n }, () => random() - 0.5)
      const { x, residual } = solveRefined(symbolic, elements, none, factorise(symbolic, elements, none), load)
      const dense = new CholeskyDecomposition(denseOf(graph, elements)).solve(Matrix.columnVector(load)).to1DArray()
      x.forEach((value, i) => expectNear(value, dense[i], { rel: 1e-9, abs: 1e-10, because: 'dense oracle' }))
      expect(residual).toBeLessThan(1e-15)
    })
  }

  it('holds fixed dofs at zero, whatever load stands there', () => {
    const graph = patterns.grid
    const random = randomStream(7)
    const elements = elementsFor(graph, random)
    const symbolic = analyse(graph)
    const fixed = new Uint8Array(symbolic.n)
    for (const dof of [0, 1, 13, 60]) fixed[dof] = 1
    const load = Float64Array.from({ length: symbolic.n }, () => random() - 0.5)
    const { x, residual } = solveRefined(symbolic, elements, fixed, factorise(symbolic, elements, fixed), load)
    const free = [...fixed.keys()].filter((dof) => !fixed[dof])
    const dense = new CholeskyDecomposition(denseOf(graph, elements).selection(free, free))
      .solve(Matrix.columnVector(free.map((dof) => load[dof])))
      .to1DArray()
    free.forEach((dof, i) => expectNear(x[dof], dense[i], { rel: 1e-9, abs: 1e-10, because: 'dense oracle' }))
    fixed.forEach((held, dof) => held && expect(x[dof]).toBe(0))
    expect(residual).toBeLessThan(1e-15)
  })

  it('mends the answer of a factor that is off in the sixth digit', () => {
    const graph = patterns.grid
    const random = randomStream(5)
    const elements = elementsFor(graph, random)
    const symbolic = analyse(graph)
    const none = new Uint8Array(symbolic.n)
    const load = Float64Array.from({ length: symbolic.n }, () => random() - 0.5)
    const spoilt = factorise(symbolic, elements.map((matrix) => matrix.map((entry) => entry * (1 + 1e-6))), none)
    const unrefined = solveRefined(symbolic, elements, none, spoilt, load, { limit: 1 })
    expect(unrefined.steps).toBe(0)
    expect(unrefined.residual).toBeGreaterThan(1e-9)
    const refined = solveRefined(symbolic, elements, none, spoilt, load)
    expect(refined.residual).toBeLessThan(1e-15)
    expect(refined.steps).toBeGreaterThanOrEqual(2)
    const some = solveRefined(symbolic, elements, none, spoilt, load, { limit: 1e-11 })
    expect(some.residual).toBeLessThanOrEqual(1e-11)
    expect(some.steps).toBe(1)
  })

  it('answers no load with no displacement', () => {
    const elements = elementsFor(patterns.path, randomStream(1))
    const symbolic = analyse(patterns.path)
    const none = new Uint8Array(symbolic.n)
    const { x, residual, steps } = solveRefined(symbolic, elements, none, factorise(symbolic, elements, none), new Float64Array(symbolic.n))
    expect([x.every((value) => value === 0), residual, steps]).toEqual([true, 0, 0])
  })
})

import { describe, expect, it } from 'vitest'
import { errorBar } from '../../src/post/bar.ts'
import { expectNear } from '../support/near.ts'

const solve = (mesh: number, order: number, peak: number, leftOver = 0, step = 0) => ({ mesh, order, peak, leftOver, step })

describe('error bar', () => {
  it('has no width to give before there are three orders on the mesh', () => {
    expect(errorBar([solve(1, 6, 3)]).error).toBe(Infinity)
    expect(errorBar([solve(1, 5, 3), solve(1, 6, 3)]).error).toBe(Infinity)
    expect(errorBar([solve(1, 4, 3), solve(1, 5, 3), solve(2, 6, 3)]).error).toBe(Infinity)
  })

  it('is the widest that the evidence gives, and names it', () => {
    const steps = [solve(1, 4, 3.02), solve(1, 5, 3.01), solve(1, 6, 3)]
    expect(errorBar(steps).source).toBe('order')
    expectNear(errorBar(steps).error, 0.03, { rel: 1e-9, because: 'three times the last step, from an odd order to an even one' })
    const odd = [solve(1, 5, 3.02), solve(1, 6, 3.01), solve(1, 7, 3)]
    expectNear(errorBar(odd).error, 0.02, { rel: 1e-9, because: 'twice the last step, from an even order to an odd one' })
    const crossing = [solve(1, 4, 3.5), solve(1, 5, 3.001), solve(1, 6, 3)]
    expect(errorBar(crossing).source).toBe('two orders')
    expectNear(errorBar(crossing).error, 0.15, { rel: 1e-9, because: '0.3 of the last two steps' })
    expect(errorBar([...steps.slice(0, 2), solve(1, 6, 3, 0.25)])).toEqual({ error: 0.25 * 0.2, source: 'free edge' })
    expect(errorBar([...steps.slice(0, 2), solve(1, 6, 3, 0, 0.08)])).toEqual({ error: 0.08 * 0.6, source: 'step' })
    expect(errorBar([solve(1, 4, 3.02), solve(1, 5, 3.01, 0, 0.1), solve(1, 6, 3)])).toEqual({ error: 0.1 * 0.4, source: 'step' })
    expect(errorBar([solve(1, 4, 3), solve(1, 5, 3), solve(1, 6, 3)]).source).toBe('rounding')
  })

  it('compares with the orders below on its own mesh only', () => {
    const steps = [solve(1, 6, 5), solve(1, 7, 4), solve(1, 8, 3.5), solve(2, 6, 3.2), solve(2, 7, 3.05), solve(2, 8, 3)]
    expectNear(errorBar(steps).error, 0.15, { rel: 1e-9, because: 'orders 7 and 8 on mesh 2' })
  })

  it('leans on the stress left over as long as the steps are irregular', () => {
    const leftOver = (order: number) =>
      errorBar([solve(1, order, 3), solve(2, order - 2, 3), solve(2, order - 1, 3), solve(2, order, 3, 0.1)]).error
    expect([1, 2, 4, 5, 8].map(leftOver)).toEqual([4, 1.25, 1.25, 0.2, 0.2].map((share) => share * 0.1))
  })

  it('of order 1 and 2 looks at the meshes only', () => {
    const bar = errorBar([solve(1, 2, 3.1), solve(2, 1, 2), solve(2, 2, 3)])
    expectNear(bar.error, 0.2, { rel: 1e-9, because: 'twice the step in mesh' })
  })
})

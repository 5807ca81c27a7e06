import { describe, expect, it } from 'vitest'
import { meshPlate } from '../../src/mesh/build.ts'
import { condensedElements } from '../../src/solve/nested.ts'
import { solveOrders, solvePlate } from '../../src/solve/solve.ts'
import { plateFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'

const { plate } = plateFrom({
  thickness: 5,
  plate: { sections: [{ width: 50, length: 120 }] },
  holes: [{ shape: 'circle', diameter: 20, at: [60, 4] }],
  load: { axial: 1000 }
})
const mesh = meshPlate(plate, { raiser: [0], all: 0 }, 'mixed')

describe('several orders from one integration', () => {
  it('are what each order gives alone, but for the finer quadrature of curved elements', () => {
    const together = solveOrders(plate, mesh, [4, 5, 7])
    together.forEach((solution) => {
      const alone = solvePlate(plate, mesh, solution.order)
      const largest = Math.max(...alone.coefficient.map(Math.abs))
      expect(solution.coefficient.length).toBe(alone.coefficient.length)
      solution.coefficient.forEach((c, i) => expectNear(c, alone.coefficient[i], { abs: 3e-5 * largest, because: `amplitude ${i} at order ${solution.order}` }))
    })
    // the highest one is integrated as it is alone
    const highest = solvePlate(plate, mesh, 7)
    expect(together[2].coefficient).toEqual(highest.coefficient)
  })

  it('share nothing where an order has other curved sides', () => {
    expect(() => condensedElements(plate, mesh, [2, 3])).toThrow(RangeError)
    const [low, high] = solveOrders(plate, mesh, [2, 3])
    expect(low.coefficient).toEqual(solvePlate(plate, mesh, 2).coefficient)
    expect(high.coefficient).toEqual(solvePlate(plate, mesh, 3).coefficient)
  })
})

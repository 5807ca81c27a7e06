import { describe, expect, it } from 'vitest'
import type { Plate, Point } from '../../src/case/plate.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { boundarySidesOf } from '../../src/post/pass.ts'
import { freeEdgeResidual, sidePeaks } from '../../src/post/peak.ts'
import { edgeStress, stressAtPoint, type Solution } from '../../src/solve/field.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { kirsch, lame, tractionOf, worstStress, type StressField } from '../support/fields.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'
import { expectNear } from '../support/near.ts'

const square: Point[] = [[-3, -3], [3, -3], [3, 3], [-3, 3]]

function solved(plate: Plate, order: number, halvings = 0): Solution {
  return solvePlate(plate, meshPlate(plate, { raiser: plate.raisers.map(() => halvings), all: 0 }, 'mixed'), order)
}

describe('patch tests', () => {
  it('uniform stress comes out exactly at every order, on straight triangles', () => {
    const uniform: StressField = () => [0.7, -0.4, 0.3]
    const plate = plateOf([polygon([[0, 0], [1, 0.1], [1.2, 0.9], [0.4, 1.3], [-0.2, 0.6]], tractionOf(uniform))], 0.29)
    for (const order of [1, 2, 3, 5, 8]) {
      expectNear(worstStress(solved(plate, order), uniform), 0, { abs: 1e-12, because: 'a linear displacement is in the space' })
    }
  })

  it('pure bending comes out exactly from order 2 on', () => {
    const bending: StressField = (_, y) => [y, 0, 0]
    const plate = plateOf([polygon([[0, -0.2], [1, -0.2], [1, 0.2], [0, 0.2]], tractionOf(bending))])
    for (const order of [2, 3, 6]) {
      expectNear(worstStress(solved(plate, order), bending), 0, { abs: 1e-12, because: 'a quadratic displacement is in the space' })
    }
  })
})

describe('Kirsch: hole in a pulled plate, exact tractions on a finite square', () => {
  const traction = tractionOf(kirsch)
  const plate = plateOf([polygon(square, traction), circle([0, 0], 1, -1, 0, null)])

  it('converges exponentially with the order, in the whole field', () => {
    const errors = [2, 4, 6, 8].map((order) => worstStress(solved(plate, order), kirsch))
    // from order to order + 2 the error falls by a factor that does not shrink
    expect(errors[1]).toBeLessThan(0.3 * errors[0])
    expect(errors[2]).toBeLessThan(0.3 * errors[1])
    expect(errors[3]).toBeLessThan(0.3 * errors[2])
    expect(errors[3]).toBeLessThan(2e-3)
  })

  it('gives 3 at the top of the hole and -1 at its side', () => {
    const solution = solved(plate, 8, 1)
    const own = boundarySidesOf(plate, solution.mesh, 0)
    const peak = Math.max(...sidePeaks(solution, own).map(({ stress }) => stress))
    expectNear(peak, 3, { rel: 1e-5, because: 'exact; order 8 on a refined mesh' })
    const least = Math.min(...own.flatMap((b) => Array.from(edgeStress(solution, b, [-1, -0.5, 0, 0.5, 1]))))
    expectNear(least, -1, { abs: 1e-4, because: 'exact' })
    expect(freeEdgeResidual(solution, own)).toBeLessThan(1e-3)
  })

  it('reads the stress at any point, also on the edge, and none outside', () => {
    const solution = solved(plate, 8, 1)
    for (const [x, y] of [[0, 1], [1.5, 0.3], [-2.9, 2.9], [0.8, -0.7]]) {
      const found = stressAtPoint(solution, x, y)
      expect(found).not.toBeNull()
      kirsch(x, y).forEach((s, i) => expectNear(found![i], s, { abs: 1e-4, because: 'exact field' }))
    }
    expect(stressAtPoint(solution, 0.2, 0.1)).toBeNull()
    expect(stressAtPoint(solution, 3.1, 0)).toBeNull()
  })

  it('balances: loads, reactions and residual at rounding; the energy is half the work', () => {
    const solution = solved(plate, 6)
    expect(solution.balance).toBeLessThan(1e-12)
    expect(solution.residual).toBeLessThan(1e-14)
  })

  it('does not depend on nu: no hole carries a net force (J.H. Michell, Proc. London Math. Soc. 31 (1899) 100)', () => {
    const peaks = [0, 0.2, 0.49].map((nu) => {
      const solution = solved({ ...plate, nu }, 8, 1)
      return Math.max(...sidePeaks(solution, boundarySidesOf(plate, solution.mesh, 0)).map(({ stress }) => stress))
    })
    for (const peak of peaks) expectNear(peak, 3, { rel: 2e-5, because: 'exact for every nu' })
  })
})

describe('Lame: ring under internal pressure', () => {
  it('converges in the whole field, with the nu times pressure term in the edge stress', () => {
    const traction = tractionOf(lame)
    const outer = circle([0, 0], 2, 1, -1, null)
    const plate = plateOf([outer, circle([0, 0], 1, -1, 0, traction)])
    expectNear(worstStress(solved(plate, 8), lame), 0, { abs: 1e-4, because: 'exact; order 8' })
    const solution = solved(plate, 8)
    for (const b of boundarySidesOf(plate, solution.mesh, 0)) {
      for (const stress of edgeStress(solution, b, [-0.8, 0, 0.6])) {
        expectNear(stress, 5 / 3, { rel: 1e-5, because: 'hoop stress p (b^2 + a^2) / (b^2 - a^2) at the bore' })
      }
    }
  })
})

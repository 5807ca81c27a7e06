import { describe, expect, it } from 'vitest'
import type { Plate, Point } from '../../src/case/plate.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { elementCount, nodesOf, type ElementKind } from '../../src/mesh/mesh.ts'
import { FIELD, fieldSampler, type Sampler, type Solution } from '../../src/solve/field.ts'
import { recoveredSampler, reportedSampler } from '../../src/solve/recovery.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { lame, tractionOf, type StressField } from '../support/fields.ts'
import { expectNear } from '../support/near.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'

const ring = plateOf([circle([0, 0], 2, 1, -1, null), circle([0, 0], 1, -1, 0, tractionOf(lame))])

function solved(plate: Plate, order: number, all: number, kind: ElementKind): Solution {
  return solvePlate(plate, meshPlate(plate, { raiser: plate.raisers.map(() => 0), all }, kind), order)
}

/** Root mean square over all elements' sample points (vertices and centre) of the error of all stress components. */
function errorOf({ mesh }: Solution, sample: Sampler, exact: StressField): number {
  let sum = 0
  let count = 0
  for (let e = 0; e < elementCount(mesh); e++) {
    const reference = nodesOf(mesh, e).length === 3 ? [0, 0, 1, 0, 0, 1, 1 / 3, 1 / 3] : [-1, -1, 1, -1, 1, 1, -1, 1, 0, 0]
    const field = sample(e, Float64Array.from(reference))
    for (let q = 0; q < field.length; q += FIELD) {
      exact(field[q], field[q + 1]).forEach((s, c) => (sum += (field[q + 4 + c] - s) ** 2))
      count++
    }
  }
  return Math.sqrt(sum / count)
}

describe('patch recovery', () => {
  it.each(['triangle', 'mixed', 'quad'] as const)('is far closer to the exact ring than the elements of order 1 and 2: %s', (kind) => {
    for (const [order, gain] of [[1, 4], [2, 2]] as const) {
      const solution = solved(ring, order, 3, kind)
      const raw = errorOf(solution, fieldSampler(solution), lame)
      const recovered = errorOf(solution, recoveredSampler(solution), lame)
      expect(recovered, `order ${order}`).toBeLessThan(raw / gain)
    }
  })

  it('falls faster on finer meshes than the error of the elements', () => {
    for (const order of [1, 2]) {
      const [coarse, fine] = [1, 3].map((all) => {
        const solution = solved(ring, order, all, 'triangle')
        return [errorOf(solution, fieldSampler(solution), lame), errorOf(solution, recoveredSampler(solution), lame)]
      })
      // two halvings: the elements' own error falls with the element size to the power of the order
      expectNear(coarse[0] / fine[0], 4 ** order, { rel: 0.15, because: 'stress of order p converges like h^p' })
      expect(coarse[1] / fine[1]).toBeGreaterThan(2 * 4 ** order)
    }
  })

  it('reproduces a stress that elements of order 2 have exactly, on the boundary too', () => {
    const bending: StressField = (_, y) => [y, 0, 0]
    const corners: Point[] = [[0, -1], [3, -1], [3, 1], [0, 1]]
    const plate = plateOf([polygon(corners, tractionOf(bending))])
    for (const kind of ['triangle', 'quad'] as const) {
      const solution = solved(plate, 2, 1, kind)
      expectNear(errorOf(solution, recoveredSampler(solution), bending), 0, { abs: 1e-10, because: 'a linear stress lies in every fit' })
    }
  })

  it('is what is shown up to order 2, and the elements\' own stress above', () => {
    const at = Float64Array.of(0.2, 0.3)
    for (const order of [1, 2, 3]) {
      const solution = solved(ring, order, 0, 'triangle')
      const shown = order <= 2 ? recoveredSampler(solution) : fieldSampler(solution)
      expect(reportedSampler(solution)(0, at)).toEqual(shown(0, at))
    }
  })
})

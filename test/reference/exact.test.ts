// The accuracy loop against exact solutions, through the library: any plate whose tractions balance.

import { describe, expect, it } from 'vitest'
import { circularArc, type Plate, type Point } from '../../src/case/plate.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { barsOf } from '../../src/post/compose.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { settle } from '../../src/verify.ts'
import { curvedBar, inglis, kirsch, lame, tractionOf, worstStress, type StressField } from '../support/fields.ts'
import { expectNear } from '../support/near.ts'
import { circle, edge, ellipseHole, plateOf, polygon } from '../support/plates.ts'

const square = (half: number): Point[] => [[-half, -half], [half, -half], [half, half], [-half, half]]

/** A quarter of the ring 1 <= r <= 2, bent by tractions on its two straight ends; its inner arc is the raiser. */
function quarterRing(): Plate {
  const traction = tractionOf(curvedBar)
  const line = (from: Point, to: Point) => edge({ kind: 'line', from, to }, 'end', -1, traction)
  const outer = circularArc([0, 0], 2, 0, Math.PI / 2, { from: [2, 0], to: [0, 2] })
  const inner = circularArc([0, 0], 1, Math.PI / 2, -Math.PI / 2, { from: [0, 1], to: [1, 0] })
  return plateOf([[line([1, 0], [2, 0]), edge(outer, 'side', -1, null), line([0, 2], [0, 1]), edge(inner, 'fillet', 0, null)]])
}

const ellipse = (a: number, b: number, half: number) => plateOf([polygon(square(half), tractionOf(inglis(a, b))), ellipseHole(a, b, 0)])

const problems: Record<string, { plate: Plate; field: StressField; peak: number }> = {
  'Kirsch: round hole, pulled': { plate: plateOf([polygon(square(3), tractionOf(kirsch)), circle([0, 0], 1, -1, 0, null)]), field: kirsch, peak: 3 },
  // 1 + 2 a / b at the end of the axis that lies across the pull
  'Inglis: ellipse across the pull': { plate: ellipse(2, 1, 5), field: inglis(2, 1), peak: 5 },
  'Inglis: ellipse along the pull': { plate: ellipse(1, 2, 5), field: inglis(1, 2), peak: 2 },
  'Inglis: slender ellipse across the pull': { plate: ellipse(1, 0.2, 3), field: inglis(1, 0.2), peak: 11 },
  'Lame: ring under internal pressure': { plate: plateOf([circle([0, 0], 2, 1, -1, null), circle([0, 0], 1, -1, 0, tractionOf(lame))]), field: lame, peak: 5 / 3 },
  // Timoshenko, Goodier, art. 29, table for b / a = 2: 7.755 M / a^2 (memory); the digits from the formula
  'Golovin: curved bar, bent': { plate: quarterRing(), field: curvedBar, peak: 7.755243568429465 }
}

describe.each(Object.entries(problems))('%s', (_, { plate, field, peak }) => {
  it.each([1e-3, 1e-5])('holds to a tolerance of %f, within its bar', (tolerance) => {
    const { passes, solution } = settle(plate, tolerance)
    const found = passes[passes.length - 1].raisers[0]!.magnitude
    const bar = barsOf(passes, 1)[0]!.error
    expect(bar).toBeLessThanOrEqual(tolerance * found)
    expectNear(found, peak, { abs: bar, because: 'exact, and the bar contains the truth' })
    // the whole field, not only the peak
    expectNear(worstStress(solution, field), 0, { abs: Math.max(tolerance, 1e-4) * peak, because: 'exact field' })
  })

  it('converges exponentially with the order, in the whole field', () => {
    const mesh = meshPlate(plate, { raiser: [0], all: 0 }, 'mixed')
    const errors = [3, 5, 7, 9].map((order) => worstStress(solvePlate(plate, mesh, order), field))
    for (let i = 1; i < errors.length; i++) expect(errors[i], errors.join(', ')).toBeLessThan(0.35 * errors[i - 1])
  })
})

describe('the exact field of the ellipse', () => {
  it.each([[2, 1], [1, 2], [5, 1]])('leaves the edge free and is a pull far away: %f by %f', (a, b) => {
    const field = inglis(a, b)
    for (let t = 0.05; t < 6.3; t += 0.3) {
      const [x, y] = [a * Math.cos(t), b * Math.sin(t)]
      const [tx, ty] = tractionOf(field)([x, y], [Math.cos(t) / a, Math.sin(t) / b])
      expectNear(Math.hypot(tx, ty), 0, { abs: 1e-12, because: 'the hole carries nothing' })
    }
    const far = field(1e5, 2e5)
    ;[0, 1, 0].forEach((s, c) => expectNear(far[c], s, { abs: 1e-8, because: 'S along y' }))
    expectNear(field(a, 0)[1], 1 + (2 * a) / b, { rel: 1e-12, because: 'Inglis' })
  })
})

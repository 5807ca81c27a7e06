import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { areaOf, derivativeOn, lengthOf, pointOn, type Edge, type Plate } from '../../src/case/plate.ts'
import { buildPlate } from '../../src/case/build.ts'
import { CaseError } from '../../src/case/problem.ts'
import { caseFrom, plateFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'

const load = { thickness: 5, load: { axial: 1000 } }
const strip = { ...load, plate: { sections: [{ width: 40, length: 200 }] } }
const notched = (shape: object) => plateFrom({ ...strip, notches: [{ id: 'nick', side: 'top', x: 90, ...shape }] }).plate

/** Sine of the turn from one edge to the next. */
function turnBetween(before: Edge, after: Edge): number {
  const [ax, ay] = derivativeOn(before.curve, 1)
  const [bx, by] = derivativeOn(after.curve, 0)
  return (ax * by - ay * bx) / (Math.hypot(ax, ay) * Math.hypot(bx, by))
}

function expectSound({ loops }: Plate): void {
  loops.forEach((loop, l) => {
    loop.forEach(({ curve }, i) => {
      expect(loop[(i + 1) % loop.length].curve.from).toEqual(curve.to)
      expect(lengthOf(curve)).toBeGreaterThan(1e-7)
      if (curve.kind === 'line') return
      expect(Math.abs(curve.sweep)).toBeLessThanOrEqual(Math.PI / 2 + 1e-12)
      for (const [t, end] of [[1e-300, curve.from], [1 - 1e-16, curve.to]] as const) {
        const [x, y] = pointOn(curve, t)
        // an end off by NO_LENGTH is where a length was too short to be drawn
        expectNear(Math.hypot(x - end[0], y - end[1]), 0, { abs: 2e-11, because: 'the arc runs to its ends' })
      }
    })
    expect(Math.sign(areaOf(loop))).toBe(l === 0 ? 1 : -1)
  })
}

describe('a notch whose depth is its radius but for a rounding', () => {
  // depth - radius in grid steps of the plate: a semicircle either way
  it.each([-8, -3, -1, 0, 1, 3, 8])('%s grid steps', (steps) => {
    const plate = notched({ depth: 6, radius: 6 - steps * 200 * 2 ** -40 })
    expectSound(plate)
    expectNear(areaOf(plate.loops[0]) * plate.unit.length ** 2, 8000 - 18 * Math.PI, { abs: 1e-7, because: 'half a circle is taken out' })
    expect(plate.loops[0].filter(({ part }) => part === 'root')).toHaveLength(2)
    expect(plate.loops[0].filter(({ part }) => part === 'flank')).toHaveLength(0)
  })
})

describe('a V of any angle', () => {
  it('passes from segment to flanks where depth = r (1 - sin(angle / 2)), with no jump in area', () => {
    for (const angle of [10, 60, 120, 170]) {
      const radius = 5
      const depth = radius * (1 - Math.sin((angle * Math.PI) / 360))
      const area = (d: number) => {
        const plate = notched({ depth: d, radius, angle })
        expectSound(plate)
        return areaOf(plate.loops[0]) * plate.unit.length ** 2
      }
      const [before, at, after] = [area(depth * (1 - 1e-3)), area(depth), area(depth * (1 + 1e-3))]
      // the area falls with the depth by about the width of the mouth
      const mouth = 2 * radius * Math.cos((angle * Math.PI) / 360)
      expectNear(before - at, mouth * depth * 1e-3, { rel: 2e-3, because: `mouth times depth, ${angle} degrees` })
      expectNear(at - after, mouth * depth * 1e-3, { rel: 6e-3, because: `mouth times depth, ${angle} degrees` })
    }
  })
})

describe('a fillet larger than its step', () => {
  it.each([['narrows', false], ['widens', true]] as const)('ends at the corner of the wide section, where the bar %s', (_, widens) => {
    const sections = [{ width: 60, length: 100 }, { width: 50, length: 100 }]
    const { plate } = plateFrom({ ...load, plate: { sections: widens ? sections.toReversed() : sections, fillets: [13] } })
    expectSound(plate)
    const { length } = plate.unit
    const arcs = plate.loops[0].filter(({ part }) => part === 'fillet')
    expect(arcs).toHaveLength(2)
    expect(plate.loops[0].filter(({ part }) => part === 'face')).toHaveLength(0)
    for (const { curve, side, origin } of arcs) {
      if (curve.kind !== 'arc') throw new Error('a fillet is an arc')
      const [narrow, wide] = [pointOn(curve, origin), pointOn(curve, 1 - origin)]
      // H = 5, r = 13: a = sqrt(5 (26 - 5)) = sqrt(105)
      const sense = widens ? -1 : 1
      expectNear(wide[0] * length, 100, { abs: 1e-9, because: 'the face of the step' })
      expectNear(wide[1] * length, side * 30, { abs: 1e-9, because: 'the edge of the wide section' })
      expectNear(narrow[0] * length, 100 + sense * Math.sqrt(105), { abs: 1e-9, because: 'a = sqrt(H (2 r - H))' })
      expectNear(narrow[1] * length, side * 25, { abs: 1e-9, because: 'the edge of the narrow section' })
      expectNear(Math.abs(curve.sweep), Math.acos(8 / 13), { rel: 1e-9, because: 'cos = (r - H) / r' })
    }
  })
})

describe('a step that goes in on one side and out on the other', () => {
  // upper edge 20 -> 12, lower edge -20 -> -26
  const { plate } = plateFrom({ ...load, plate: { sections: [{ width: 40, length: 80 }, { width: 38, length: 90, offset: -7 }], fillets: [4] } })
  const { length } = plate.unit

  it('has its fillet in the narrow section of each side', () => {
    expectSound(plate)
    const fillets = plate.loops[0].filter(({ part }) => part === 'fillet')
    const ends = fillets.map(({ curve, side, origin }) => [side, ...pointOn(curve, origin).map((v) => Math.round(v * length * 1e6) / 1e6)])
    expect(ends.toSorted((a, b) => b[0] - a[0])).toEqual([[1, 84, 12], [-1, 76, -20]])
    expect(plate.raisers).toHaveLength(1)
  })

  it('has the area of its sections and two fillets', () => {
    const added = 16 - 4 * Math.PI
    expectNear(areaOf(plate.loops[0]) * length ** 2, 40 * 80 + 38 * 90 + 2 * added, { rel: 1e-11, because: 'r^2 (1 - pi / 4) each' })
  })
})

describe('any bar that is taken', () => {
  const size = (min: number, max: number) => fc.double({ min, max, noNaN: true })
  const section = fc.record({ width: size(20, 60), length: size(60, 120), offset: size(-8, 8) })
  const bar = fc.array(section, { minLength: 1, maxLength: 4 }).chain((sections) =>
    fc.record({
      plate: fc.record({ sections: fc.constant(sections), fillets: fc.array(fc.oneof(size(0.5, 12), fc.constant(0)), { minLength: sections.length - 1, maxLength: sections.length - 1 }) }),
      notches: fc.array(fc.record({ side: fc.constantFrom('top', 'bottom', 'both'), x: size(5, 55), depth: size(0.5, 6), radius: size(0.5, 6), angle: fc.oneof(fc.constant(0), size(0, 130)) }), { maxLength: 2 }),
      holes: fc.array(fc.record({ shape: fc.constant('circle'), diameter: size(1, 8), at: fc.tuple(size(5, 200), size(-8, 8)) }), { maxLength: 2 })
    })
  )

  it('is closed to the bit, turns the right way, and is tangent wherever an arc meets a fillet\'s or flank\'s line', () => {
    let taken = 0
    fc.assert(
      fc.property(bar, (drawn) => {
        let plate: Plate
        try {
          plate = buildPlate(caseFrom({ ...load, ...drawn }))
        } catch (error) {
          if (error instanceof CaseError) return
          throw error
        }
        taken++
        expectSound(plate)
        const [outer] = plate.loops
        outer.forEach((after, i) => {
          const before = outer[(i + outer.length - 1) % outer.length]
          const parts = `${before.part} ${after.part}`
          if (['flank root', 'root flank', 'root root', 'face fillet', 'fillet face'].includes(parts)) {
            expectNear(turnBetween(before, after), 0, { abs: 1e-9, because: parts })
          }
          if ((after.part === 'fillet' && after.origin === 0 && before.part === 'side') || (before.part === 'fillet' && before.origin === 1 && after.part === 'side')) {
            expectNear(turnBetween(before, after), 0, { abs: 1e-9, because: 'a fillet leaves the narrow edge along it' })
          }
        })
        // two right angles at each end
        expect(outer.filter(({ part }) => part === 'end').map(({ label }) => label).toSorted()).toEqual(['the left end', 'the right end'])
      }),
      { seed: 51, numRuns: 300 }
    )
    // the rest is refused for overlaps; too few taken would test nothing
    expect(taken).toBeGreaterThan(100)
  })

  it('balances: the left end\'s traction against the right end\'s', () => {
    fc.assert(
      fc.property(fc.array(section, { minLength: 1, maxLength: 3 }), size(-5, 5), size(-50, 50), (sections, axial, moment) => {
        fc.pre(Math.abs(axial) > 1e-3)
        const { plate } = plateFrom({ thickness: 2, plate: { sections, fillets: sections.slice(1).map(() => 0) }, load: { axial, moment } })
        const [left, right] = ['the left end', 'the right end'].map((label) => {
          const { curve, traction } = plate.loops[0].find((edge) => edge.label === label)!
          const normal = [label === 'the right end' ? 1 : -1, 0] as const
          const sum = { force: 0, moment: 0, size: 0 }
          for (const [t, w] of [[0, 1 / 6], [0.5, 4 / 6], [1, 1 / 6]]) {
            const at = pointOn(curve, t)
            const pull = traction!(at, normal)[0] * w * lengthOf(curve)
            sum.force += pull
            sum.moment -= pull * at[1]
            sum.size += Math.abs(pull)
          }
          return sum
        })
        const because = 'rounding of sums of this size'
        expectNear(left.force + right.force, 0, { abs: 1e-14 * (left.size + right.size), because })
        expectNear(left.moment + right.moment, 0, { abs: 1e-14 * (left.size + right.size), because })
      }),
      { seed: 52, numRuns: 300 }
    )
  })
})

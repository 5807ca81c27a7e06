import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { buildPlate } from '../../src/case/build.ts'
import { boxOf, gapBetween, gapOfBoxes, isInside, nearestOn } from '../../src/case/nearest.ts'
import { circularArc, lengthOf, pointOn, type Arc, type Curve, type Point } from '../../src/case/plate.ts'
import { caseFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'

const coordinate = fc.double({ min: -1, max: 1, noNaN: true })
const point = fc.tuple(coordinate, coordinate)
const positive = fc.double({ min: 0.05, max: 0.8, noNaN: true })
const sweep = fc.tuple(fc.double({ min: 0.1, max: Math.PI / 2, noNaN: true }), fc.boolean()).map(([size, left]) => (left ? size : -size))
const angle = fc.double({ min: -7, max: 7, noNaN: true })

const line = fc
  .tuple(point, point)
  .filter(([[x0, y0], [x1, y1]]) => Math.hypot(x1 - x0, y1 - y0) > 0.01)
  .map(([from, to]): Curve => ({ kind: 'line', from, to }))
const circle = fc.tuple(point, positive, angle, sweep).map(([centre, radius, start, swept]): Curve => circularArc(centre, radius, start, swept))
const ellipse = fc.tuple(point, positive, positive, angle, angle, sweep).map(([centre, a, b, tilt, start, swept]): Curve => {
  const bare: Arc = { kind: 'arc', from: centre, to: centre, centre, axes: [a, b], tilt, start, sweep: swept }
  // the ends by the arc's own formula, just inside its parameters
  return { ...bare, from: pointOn(bare, 1e-300), to: pointOn(bare, 1 - 1e-16) }
})

const distance = ([x0, y0]: Point, [x1, y1]: Point) => Math.hypot(x1 - x0, y1 - y0)
const samplesOf = (curve: Curve, count: number) => Array.from({ length: count + 1 }, (_, i) => pointOn(curve, i / count))

/** The smallest distance between samples of two curves, and by how much it may be above the true gap: half a chord each. */
function sampledGap(a: Curve, b: Curve, count: number): { least: number; slack: number } {
  const onB = samplesOf(b, count)
  const least = samplesOf(a, count).reduce((best, at) => onB.reduce((so, other) => Math.min(so, distance(at, other)), best), Infinity)
  const stretch = (curve: Curve) => (curve.kind === 'arc' ? Math.max(...curve.axes) * Math.abs(curve.sweep) : lengthOf(curve))
  return { least, slack: (stretch(a) + stretch(b)) / (2 * count) }
}

describe('the nearest point of a curve', () => {
  it.each([['line', line], ['circle', circle], ['ellipse', ellipse]] as const)('of a %s is on it, and no sample is nearer', (_, curves) => {
    fc.assert(
      fc.property(curves, point, (curve, from) => {
        const { t, at } = nearestOn(curve, from[0], from[1])
        expect(t >= 0 && t <= 1).toBe(true)
        expectNear(distance(at, pointOn(curve, t)), 0, { abs: 1e-14, because: 'parameter and place agree' })
        const least = Math.min(...samplesOf(curve, 200).map((sample) => distance(sample, from)))
        expect(distance(at, from)).toBeLessThanOrEqual(least + 1e-12)
      }),
      { seed: 21, numRuns: 200 }
    )
  })
})

describe('the gap between two curves', () => {
  const pairs = [
    ['line and line', line, line],
    ['line and circle', line, circle],
    ['circle and line', circle, line],
    ['circle and circle', circle, circle]
  ] as const
  it.each(pairs)('%s: as samples have it', (_, first, second) => {
    fc.assert(
      fc.property(first, second, (a, b) => {
        const { gap, a: onA, b: onB } = gapBetween(a, b)
        const { least, slack } = sampledGap(a, b, 100)
        expect(gap).toBeLessThanOrEqual(least + 1e-12)
        expect(gap).toBeGreaterThanOrEqual(least - slack - 1e-12)
        // and it is taken where it is said to be
        expectNear(distance(onA, onB), gap, { abs: 1e-12, because: 'the two points are the gap apart' })
        for (const [curve, at] of [[a, onA], [b, onB]] as const) {
          expectNear(distance(nearestOn(curve, at[0], at[1]).at, at), 0, { abs: 1e-12, because: 'each point is on its curve' })
        }
      }),
      { seed: 22, numRuns: 200 }
    )
  })

  it.each([['ellipse and line', line], ['ellipse and circle', circle], ['ellipse and ellipse', ellipse]] as const)('%s: as samples have it', (_, second) => {
    fc.assert(
      fc.property(ellipse, second, (a, b) => {
        const { gap } = gapBetween(a, b)
        const { least, slack } = sampledGap(a, b, 100)
        expect(gap).toBeLessThanOrEqual(least + 1e-9)
        expect(gap).toBeGreaterThanOrEqual(least - slack - 1e-9)
      }),
      { seed: 23, numRuns: 25 }
    )
  })

  it('closed forms: beside, across, in one another', () => {
    const quarter = circularArc([0, 0], 1, 0, Math.PI / 2)
    const wall: Curve = { kind: 'line', from: [2, -1], to: [2, 3] }
    expectNear(gapBetween(quarter, wall).gap, 1, { abs: 1e-15, because: 'from (1, 0) to the wall' })
    const chord: Curve = { kind: 'line', from: [0, 0], to: [1, 1] }
    expect(gapBetween(quarter, chord).gap).toBe(0)
    const inner = circularArc([0, 0], 0.7, 0.2, 1)
    expectNear(gapBetween(quarter, inner).gap, 0.3, { abs: 1e-15, because: 'concentric arcs' })
    const roots = [circularArc([0, 5], 3, Math.PI, Math.PI), circularArc([4, -4], 2, 0, Math.PI)]
    expectNear(distance(roots[0].centre, roots[1].centre) - 5, gapBetween(roots[0], roots[1]).gap, { abs: 1e-14, because: 'two roots that face each other' })
  })
})

describe('the boxes of two curves', () => {
  it('hold them, and their gap is at most that of the curves', () => {
    const curve = fc.oneof(line, circle)
    fc.assert(
      fc.property(curve, curve, (a, b) => {
        const [x0, y0, x1, y1] = boxOf(a)
        for (const [x, y] of samplesOf(a, 40)) expect(x >= x0 - 1e-15 && x <= x1 + 1e-15 && y >= y0 - 1e-15 && y <= y1 + 1e-15).toBe(true)
        expect(gapOfBoxes(boxOf(a), boxOf(b))).toBeLessThanOrEqual(gapBetween(a, b).gap + 1e-15)
      }),
      { seed: 25, numRuns: 300 }
    )
  })
})

describe('inside a loop', () => {
  const plate = buildPlate(
    caseFrom({
      thickness: 5,
      plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [8] },
      notches: [{ side: 'both', x: 50, depth: 10, radius: 4 }],
      load: { axial: 1000 }
    })
  )
  const { length } = plate.unit

  it('a stepped and notched bar, by its dimensions', () => {
    fc.assert(
      fc.property(fc.double({ min: -20, max: 220, noNaN: true }), fc.double({ min: -40, max: 40, noNaN: true }), (x, y) => {
        // the very edge is neither in nor out
        fc.pre([0, 100, 200].every((edge) => Math.abs(x - edge) > 1e-6) && [20, 30].every((edge) => Math.abs(Math.abs(y) - edge) > 1e-6))
        expect(isInside(plate.loops[0], [x / length, y / length])).toBe(isInBar(x, y))
      }),
      { seed: 24, numRuns: 2000 }
    )
  })

  /** The bar above, region by region: two strips, less slots with round roots, more what the fillets add. */
  function isInBar(x: number, y: number): boolean {
    const out = Math.abs(y)
    if (x < 0 || x > 200) return false
    if (x > 100) return out < 20 || (x < 108 && out < 28 && Math.hypot(x - 108, out - 28) > 8)
    const inNotch = Math.abs(x - 50) < 4 && (out > 24 || Math.hypot(x - 50, out - 24) < 4)
    return out < 30 && !inNotch
  }
})

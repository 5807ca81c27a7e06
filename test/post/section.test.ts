import { describe, expect, it } from 'vitest'
import { circularArc, type Arc, type Curve, type Edge, type Loop, type Point } from '../../src/case/plate.ts'
import { cutLoop, sectionProperties, subtractCut } from '../../src/post/section.ts'
import { expectNear } from '../support/near.ts'

const ROUNDING = { abs: 1e-14, because: 'closed-form arithmetic on numbers of order 1' }

function edge(curve: Curve): Edge {
  return { curve, raiser: -1, part: 'side', side: 0, origin: 0, traction: null, label: 'test' }
}

function polygon(points: Point[]): Loop {
  return points.map((from, k) => edge({ kind: 'line', from, to: points[(k + 1) % points.length] }))
}

function ellipse(centre: Point, axes: Point, tilt: number, clockwise: boolean): Loop {
  const sweep = clockwise ? -2 * Math.PI : 2 * Math.PI
  const start: Point = [centre[0] + axes[0] * Math.cos(tilt), centre[1] + axes[0] * Math.sin(tilt)]
  const arc: Arc = { kind: 'arc', from: start, to: start, centre, axes, tilt, start: 0, sweep }
  return [edge(arc)]
}

describe('cutLoop', () => {
  // wide part 0.6 high up to x = 0.5, then 0.4 high
  const stepped = polygon([[0, -0.3], [0.5, -0.3], [0.5, -0.2], [1, -0.2], [1, 0.2], [0.5, 0.2], [0.5, 0.3], [0, 0.3]])

  it('takes a face that stands on the line from the side asked for', () => {
    expect(cutLoop(stepped, 0.5, -1)).toEqual([[-0.3, 0.3]])
    expect(cutLoop(stepped, 0.5, 1)).toEqual([[-0.2, 0.2]])
    expect(cutLoop(stepped, 0.25, 1)).toEqual([[-0.3, 0.3]])
  })

  it('finds nothing beyond the loop, and nothing where the line only touches', () => {
    expect(cutLoop(stepped, 1.5, 1)).toEqual([])
    expect(cutLoop(stepped, 1, 1)).toEqual([])
    expect(cutLoop(stepped, 1, -1)).toEqual([[-0.2, 0.2]])
    const circle = ellipse([0.5, 0], [0.1, 0.1], 0, true)
    expect(cutLoop(circle, 0.6, 1)).toEqual([])
  })

  it('cuts a circle at the height that Pythagoras gives, whichever way it runs', () => {
    for (const clockwise of [true, false]) {
      const [[low, high]] = cutLoop(ellipse([0.5, 0.1], [0.1, 0.1], 0, clockwise), 0.56, 1)
      expectNear(low, 0.1 - 0.08, ROUNDING)
      expectNear(high, 0.1 + 0.08, ROUNDING)
    }
  })

  it('cuts a circle made of quarters exactly at its top and bottom', () => {
    const quarters = [0, 1, 2, 3].map((k) => edge(circularArc([0.5, 0], 0.125, (-k * Math.PI) / 2, -Math.PI / 2)))
    const closed = quarters.map((e, k) => edge({ ...(e.curve as Arc), to: quarters[(k + 1) % 4].curve.from }))
    for (const side of [1, -1] as const) {
      const cut = cutLoop(closed, 0.5, side)
      expect(cut).toHaveLength(1)
      expectNear(cut[0][0], -0.125, ROUNDING)
      expectNear(cut[0][1], 0.125, ROUNDING)
    }
  })

  it('cuts a tilted ellipse where its equation holds', () => {
    const [a, b, tilt] = [0.2, 0.07, 0.6]
    const cut = cutLoop(ellipse([0.5, 0.05], [a, b], tilt, true), 0.43, 1)
    expect(cut).toHaveLength(1)
    for (const y of cut[0]) {
      const [dx, dy] = [0.43 - 0.5, y - 0.05]
      const u = dx * Math.cos(tilt) + dy * Math.sin(tilt)
      const v = -dx * Math.sin(tilt) + dy * Math.cos(tilt)
      expectNear((u / a) ** 2 + (v / b) ** 2, 1, { abs: 1e-13, because: 'equation of the ellipse, axes of order 0.1' })
    }
  })

  it('gives both stretches of a loop that the line enters twice', () => {
    // a U open to the right
    const u = polygon([[0, 0], [1, 0], [1, 0.2], [0.3, 0.2], [0.3, 0.7], [1, 0.7], [1, 1], [0, 1]])
    expect(cutLoop(u, 0.6, 1)).toEqual([[0, 0.2], [0.7, 1]])
    expect(cutLoop(u, 0.3, 1)).toEqual([[0, 0.2], [0.7, 1]])
    expect(cutLoop(u, 0.3, -1)).toEqual([[0, 1]])
  })

  it('is not misled by lengths whose sum is rounded', () => {
    const x = 0.1 + 0.2
    const bar = polygon([[0, -0.3], [x, -0.3], [x, -0.2], [1, -0.2], [1, 0.2], [x, 0.2], [x, 0.3], [0, 0.3]])
    expect(cutLoop(bar, 0.3, 1)).toEqual([[-0.2, 0.2]])
    expect(cutLoop(bar, 0.3, -1)).toEqual([[-0.3, 0.3]])
  })
})

describe('subtractCut', () => {
  it('takes stretches out of the middle, the ends and nowhere', () => {
    expect(subtractCut([[0, 10]], [[3, 4]])).toEqual([[0, 3], [4, 10]])
    expect(subtractCut([[0, 10]], [[-1, 4], [9, 12]])).toEqual([[4, 9]])
    expect(subtractCut([[0, 2], [5, 7]], [[1, 6]])).toEqual([[0, 1], [6, 7]])
    expect(subtractCut([[0, 2]], [[3, 4]])).toEqual([[0, 2]])
    expect(subtractCut([[0, 2]], [[-1, 4]])).toEqual([])
  })
})

describe('sectionProperties', () => {
  it('gives b³/12 for a whole width and (W³ − d³)/12 for one with a central gap', () => {
    expect(sectionProperties([[0, 6]])).toEqual({ area: 6, centroid: 3, inertia: 18 })
    expect(sectionProperties([[-6, -2], [2, 6]])).toEqual({ area: 8, centroid: 0, inertia: (12 ** 3 - 4 ** 3) / 12 })
  })

  it('takes the second moment about the centroid of unequal parts', () => {
    // parts 0..2 and 5..6: area 3, centroid (2 x 1 + 1 x 5.5)/3 = 2.5; I = 8/12 + 2 x 1.5² + 1/12 + 1 x 3²
    expect(sectionProperties([[0, 2], [5, 6]])).toEqual({ area: 3, centroid: 2.5, inertia: 14.25 })
  })
})

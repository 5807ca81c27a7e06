import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { buildPlate } from '../../src/case/build.ts'
import { areaOf, derivativeOn, lengthOf, pointOn, type Plate } from '../../src/case/plate.ts'
import { readCase } from '../../src/case/read.ts'
import { expectNear } from '../support/near.ts'

const plateOf = (parts: object): Plate => buildPlate(readCase(JSON.stringify({ name: 'plate', thickness: 5, load: { axial: 1000 }, ...parts }), 'plate'))

/** Area in the case's length unit squared. */
const areaIn = (parts: object): number => {
  const plate = plateOf(parts)
  return plate.loops.reduce((sum, loop) => sum + areaOf(loop), 0) * plate.unit.length ** 2
}
const strip = { plate: { sections: [{ width: 40, length: 200 }] } }
const nick = (shape: object) => ({ ...strip, notches: [{ id: 'nick', x: 90, side: 'top', ...shape }] })

/** A circle's segment of height h. */
const segment = (r: number, h: number) => r * r * Math.acos((r - h) / r) - (r - h) * Math.sqrt(2 * r * h - h * h)

describe('area of the plate', () => {
  const cases: [string, object, number][] = [
    ['strip', strip, 8000],
    ['strip with two holes', { ...strip, holes: [{ shape: 'circle', diameter: 10, at: [50, 3] }, { shape: 'circle', diameter: 4, at: [120, -9] }] }, 8000 - Math.PI * 29],
    ['semicircle', nick({ depth: 6, radius: 6 }), 8000 - Math.PI * 18],
    ['segment', nick({ depth: 2, radius: 6 }), 8000 - segment(6, 2)],
    ['U, both sides', nick({ side: 'both', depth: 9, radius: 3 }), 8000 - 2 * (36 + Math.PI * 4.5)],
    // V of 60 degrees: root sector of 120 degrees and two kites, then the trapezium above the tangent points
    ['V', nick({ side: 'bottom', depth: 10, radius: 2, angle: 60 }), 8000 - vArea(10, 2, Math.PI / 6)],
    ['V without room for flanks', nick({ depth: 0.5, radius: 2, angle: 60 }), 8000 - segment(2, 0.5)],
    ['quarter fillets', { plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [6] } }, 10000 + 2 * (36 - Math.PI * 9)],
    ['fillets of the step height', { plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [10] } }, 10000 + 2 * (100 - Math.PI * 25)],
    ['fillets larger than the step', { plate: { sections: [{ width: 44, length: 140 }, { width: 32, length: 150 }], fillets: [20] } }, 44 * 140 + 32 * 150 + 2 * largeFillet(20, 6)],
    ['step on one side, radius on it only', { plate: { sections: [{ width: 60, length: 100, offset: 10 }, { width: 40, length: 100 }], fillets: [6] } }, 10000 + 36 - Math.PI * 9],
    ['narrow, wide, narrow', { plate: { sections: [{ width: 30, length: 50 }, { width: 50, length: 60 }, { width: 30, length: 50 }], fillets: [4, 10] } }, 6000 + 2 * (16 - Math.PI * 4) + 2 * (100 - Math.PI * 25)]
  ]
  it.each(cases)('%s', (_, parts, expected) => expectNear(areaIn(parts), expected, { rel: 1e-11, because: 'closed form' }))
})

/** Area of a V notch: from the root arc's contact points up, a trapezium; below, a sector less a triangle. */
function vArea(depth: number, r: number, half: number): number {
  const contact = r * (1 - Math.sin(half))
  const rise = depth - contact
  const bottom = 2 * r * Math.cos(half)
  const top = bottom + 2 * rise * Math.tan(half)
  return (rise * (top + bottom)) / 2 + segment(r, contact)
}

/** Material that an arc of radius r above a step of height h adds on the narrow side: rectangle a x h less what the circle takes. */
function largeFillet(r: number, h: number): number {
  const a = Math.sqrt(h * (2 * r - h))
  // the region between the narrow edge (0 .. a), the face line and the arc: integral of r - sqrt(r^2 - u^2), u = 0 .. a
  return r * a - (a * Math.sqrt(r * r - a * a) + r * r * Math.asin(a / r)) / 2
}

describe('edges', () => {
  const drawn = {
    plate: { sections: [{ width: 60, length: 110, offset: 4 }, { width: 40, length: 90 }, { width: 52, length: 80, offset: -6 }], fillets: [8, 3] },
    holes: [{ shape: 'circle', diameter: 12, at: [60, 5] }],
    notches: [{ side: 'both', x: 30, depth: 5, radius: 2 }, { side: 'top', x: 240, depth: 6, radius: 2, angle: 50 }]
  }

  it('close bit for bit, turn the right way round and sweep at most 90 degrees', () => {
    const { loops } = plateOf(drawn)
    loops.forEach((loop, l) => {
      loop.forEach(({ curve }, i) => {
        expect(loop[(i + 1) % loop.length].curve.from).toEqual(curve.to)
        expect(lengthOf(curve)).toBeGreaterThan(1e-11)
        if (curve.kind === 'line') return
        expect(Math.abs(curve.sweep)).toBeLessThanOrEqual(Math.PI / 2 + 1e-12)
        // the stated ends are those of the arc's own formula
        for (const [t, end] of [[1e-300, curve.from], [1 - 1e-16, curve.to]] as const) {
          const [x, y] = pointOn(curve, t)
          expectNear(Math.hypot(x - end[0], y - end[1]), 0, { abs: 1e-12, because: 'arc formula' })
        }
      })
      expect(Math.sign(areaOf(loop))).toBe(l === 0 ? 1 : -1)
    })
  })

  it('fillets and flanks are tangent where they meet a line', () => {
    const [outer] = plateOf(drawn).loops
    let tangents = 0
    outer.forEach((after, i) => {
      const before = outer[(i + outer.length - 1) % outer.length]
      const pair = [before.part, after.part].join(' ')
      if (!['side fillet', 'fillet side', 'face fillet', 'fillet face', 'flank root', 'root flank', 'root root'].includes(pair)) return
      // the wide end of a fillet larger than its step meets the wide edge at an angle
      if ((pair === 'side fillet' && after.origin !== 0) || (pair === 'fillet side' && before.origin !== 1)) return
      const [ax, ay] = derivativeOn(before.curve, 1)
      const [bx, by] = derivativeOn(after.curve, 0)
      const sine = (ax * by - ay * bx) / (Math.hypot(ax, ay) * Math.hypot(bx, by))
      expectNear(sine, 0, { abs: 1e-11, because: `${pair} is a tangent point` })
      tangents++
    })
    expect(tangents).toBeGreaterThanOrEqual(12)
  })

  it('know their raiser, part and side', () => {
    const plate = plateOf(drawn)
    expect(plate.raisers.map(({ id, kind }) => `${id} ${kind}`)).toEqual(['hole-1 hole', 'notch-1 notch', 'notch-2 notch', 'shoulder-1 shoulder', 'shoulder-2 shoulder'])
    const sides = (raiser: number) => [...new Set(plate.loops[0].filter((edge) => edge.raiser === raiser).map(({ side }) => side))].toSorted((a, b) => a - b)
    expect(sides(1)).toEqual([-1, 1])
    expect(sides(2)).toEqual([1])
    for (const { part, origin, curve, side } of plate.loops[0]) {
      // a root's angle counts from the deepest point, a fillet's from the narrow edge: there the edge runs along x
      if (part !== 'root' && part !== 'fillet') continue
      const [, dy] = derivativeOn(curve, origin)
      expectNear(dy, 0, { abs: 1e-12, because: 'horizontal tangent at the origin' })
      expect(side).not.toBe(0)
    }
  })

  it('a sharp step is a sharp corner of its raiser', () => {
    const plate = plateOf({ plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [0] } })
    expect(plate.raisers[0].sharp).toContain('sharp re-entrant corner')
    expect(plate.sharpCorners.map(({ raiser }) => raiser)).toEqual([0, 0])
    for (const { angle } of plate.sharpCorners) expectNear(angle, 1.5 * Math.PI, { rel: 1e-12, because: '270 degrees of material' })
  })
})

describe('end tractions', () => {
  it('carry the load at the right end and balance it at the left one, whatever the offsets', () => {
    const plate = plateOf({
      plate: { sections: [{ width: 60, length: 110, offset: 9 }, { width: 40, length: 90, offset: -4 }], fillets: [5] },
      load: { axial: 7000, moment: 50000 }
    })
    const resultant = (label: string) => {
      const { curve, traction } = plate.loops[0].find((edge) => edge.label === label)!
      const length = lengthOf(curve)
      const normal = label === 'the right end' ? ([1, 0] as const) : ([-1, 0] as const)
      let [force, moment] = [0, 0]
      // Simpson's rule is exact: force linear, moment quadratic along the end
      for (const [t, w] of [[0, 1 / 6], [0.5, 4 / 6], [1, 1 / 6]]) {
        const point = pointOn(curve, t)
        const [tx, ty] = traction!(point, normal)
        expect(ty).toBe(0)
        force += w * length * tx
        moment += w * length * tx * point[1]
      }
      return { force, moment }
    }
    const [right, left] = [resultant('the right end'), resultant('the left end')]
    expectNear(right.force, plate.bar!.axial, { rel: 1e-13, because: 'P' })
    const centre = plate.bar!.sections[1].centre
    expectNear(right.moment, plate.bar!.moment + plate.bar!.axial * centre, { rel: 1e-12, because: 'M about the right centre; positive pulls the top' })
    expectNear(left.force, -right.force, { rel: 1e-13, because: 'balance' })
    expectNear(left.moment, -right.moment, { rel: 1e-12, because: 'balance about y = 0' })
    const { length, thickness, stress } = plate.unit
    expectNear(plate.bar!.axial * length * thickness * stress, 7000, { rel: 1e-13, because: 'plate units lead back to N' })
    expectNear(plate.bar!.moment * length ** 2 * thickness * stress, 50000, { rel: 1e-13, because: 'and N mm' })
  })
})

describe('plate units', () => {
  const drawn = (f: number, units?: object) => ({
    units,
    thickness: 5 * f,
    plate: { sections: [{ width: 60.3 * f, length: 111.7 * f, offset: 1.9 * f }, { width: 41.1 * f, length: 93.3 * f, offset: 0 }], fillets: [7.7 * f] },
    holes: [{ shape: 'circle', diameter: 13.3 * f, at: [71.9 * f, 4.7 * f] }],
    notches: [{ side: 'both', x: 31.3 * f, depth: 6.1 * f, radius: 2.3 * f, angle: 50 }]
  })
  const bits = (plate: Plate) => JSON.stringify(plate.loops.map((loop) => loop.map(({ curve }) => curve)))

  it('give the same bits at any scale and in any unit of length', () => {
    const plain = bits(plateOf(drawn(1)))
    for (const factor of [1e-3, 1e3, 7, 1 / 3, 123.456]) expect(bits(plateOf(drawn(factor)))).toBe(plain)
    expect(bits(plateOf(drawn(1e-3, { length: 'm' })))).toBe(plain)
    expect(bits(plateOf(drawn(0.1, { length: 'cm' })))).toBe(plain)
    expect(bits(plateOf(drawn(1 / 25.4, { length: 'in' })))).toBe(plain)
  })

  it('and do so for nearly every drawing: a length straddles the grid in a few of 10 000 at most', () => {
    const size = fc.double({ min: 1, max: 100, noNaN: true })
    let [same, all] = [0, 0]
    fc.assert(
      fc.property(size, size, size, fc.double({ min: 1e-3, max: 1e3, noNaN: true }), (width, length, depth, f) => {
        const notch = { side: 'top', depth: 0.2 * width, radius: 0.01 * depth * width / 100 + 0.01 }
        const long = width + length
        const make = (g: number) =>
          plateOf({ thickness: g, plate: { sections: [{ width: width * g, length: long * g }] }, notches: [{ ...notch, x: (long / 2) * g, depth: notch.depth * g, radius: notch.radius * g }] })
        all++
        if (bits(make(1)) === bits(make(f))) same++
      }),
      { seed: 8, numRuns: 200 }
    )
    expect(all - same).toBeLessThanOrEqual(1)
  })
})

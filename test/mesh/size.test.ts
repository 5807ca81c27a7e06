import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { nearestOn } from '../../src/case/nearest.ts'
import { outwardNormal, pointOn, type Plate, type Traction } from '../../src/case/plate.ts'
import { sizeField } from '../../src/mesh/size.ts'
import { leastOver } from '../../src/mesh/source-tree.ts'
import { plateFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'

const place = fc.double({ min: -1, max: 1, noNaN: true })
const source = fc.record({ x: place, y: place, size: fc.double({ min: 1e-6, max: 1, noNaN: true }) })

describe('least over many sources', () => {
  it('is what looking at all of them gives, to the bit', () => {
    fc.assert(
      fc.property(fc.array(source, { maxLength: 200 }), fc.array(fc.tuple(place, place), { minLength: 1, maxLength: 20 }), (sources, points) => {
        const tree = leastOver(sources, 0.75)
        for (const [x, y] of points) {
          expect(tree(x, y)).toBe(Math.min(Infinity, ...sources.map((s) => s.size + 0.75 * Math.hypot(x - s.x, y - s.y))))
        }
      }),
      { seed: 11, numRuns: 200 }
    )
  })

  it('takes many sources in one place', () => {
    expect(leastOver(Array.from({ length: 1000 }, (_, i) => ({ x: 0.1, y: 0.2, size: 1 + i })), 1)(0.1, 0.2)).toBe(1)
  })
})

describe('size field', () => {
  const bar = (fields: object) => plateFrom({ thickness: 5, load: { axial: 1000 }, plate: { sections: [{ width: 50, length: 200 }] }, ...fields }).plate
  const at = (plate: ReturnType<typeof bar>, x: number, y: number, raiser = 0, all = 0) =>
    sizeField(plate, { raiser: plate.raisers.map(() => raiser), all })(x / plate.unit.length, y / plate.unit.length) * plate.unit.length

  it('follows the radius of an arc: half of it, about', () => {
    const plate = bar({ holes: [{ shape: 'circle', diameter: 10, at: [100, 0] }] })
    expect(at(plate, 100, 5)).toBeGreaterThan(2.4)
    expect(at(plate, 100, 5)).toBeLessThan(2.7)
  })

  it('is limited by narrow gaps: two holes, a hole at the edge, a hole between notches', () => {
    expect(at(bar({ holes: [{ shape: 'circle', diameter: 20, at: [100, 14] }] }), 100, 24.5)).toBeLessThan(1.5)
    expect(at(bar({ holes: [{ shape: 'circle', diameter: 20, at: [89.5, 0] }, { shape: 'circle', diameter: 20, at: [110.5, 0] }] }), 100, 0)).toBeLessThan(1.5)
    const notched = bar({ holes: [{ shape: 'circle', diameter: 20, at: [100, 0] }], notches: [{ side: 'both', x: 100, depth: 14, radius: 14 }] })
    expect(at(notched, 100, 10.5)).toBeLessThan(1.6)
  })

  it('is halved at refined raisers, and everywhere for all', () => {
    const plate = bar({ holes: [{ shape: 'circle', diameter: 10, at: [100, 0] }] })
    expectNear(at(plate, 100, 5, 1), at(plate, 100, 5) / 2, { rel: 1e-9, because: 'lengths are rounded to 2^-40' })
    expect(at(plate, 20, 5, 0, 2)).toBe(at(plate, 20, 5) / 4)
  })

  it('is small at tangent points, and where the load on a smooth edge begins', () => {
    const stepped = bar({ plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [8] } })
    expect(at(stepped, 108, 20)).toBeLessThan(1)
    const push: Traction = (_, [nx, ny]) => [-nx, -ny]
    const eye = circle([0, 0], 0.1, -1, 0, null).map((edge, i) => ({ ...edge, traction: i < 2 ? push : null }))
    const loaded = plateOf([polygon([[-1, -1], [1, -1], [1, 1], [-1, 1]], null), eye])
    const size = sizeField(loaded, { raiser: [0], all: 0 })
    // quarter arcs run clockwise from +x: the load begins at +x and ends at -x
    for (const [x, y, most] of [[0.1, 0, 0.01], [-0.1, 0, 0.01], [0, 0.1, 0.06], [0, -0.1, 0.06]]) expect(size(x, y)).toBeLessThan(most)
    expect(size(0, 0.1)).toBeGreaterThan(0.04)
  })

  it('asks for elements no larger than two depths in a shallow notch', () => {
    for (const depth of [0.5, 1, 2]) {
      const plate = bar({ notches: [{ side: 'top', x: 100, depth, radius: 20 }] })
      expect(at(plate, 100, 25 - depth)).toBeLessThan(2.001 * depth)
    }
  })
})

/** A square with circular holes in a grid of 3 x 3 cells, at random places in them; no raisers, so only arcs and gaps ask for sizes. */
const holed = fc
  .array(fc.record({ x: fc.double({ min: -1, max: 1, noNaN: true }), y: fc.double({ min: -1, max: 1, noNaN: true }), r: fc.double({ min: 0.05, max: 1, noNaN: true }) }), {
    minLength: 1,
    maxLength: 9
  })
  .map((holes) => {
    const circles = holes.map(({ x, y, r }, i) => {
      const radius = 0.16 * r
      const room = 1 / 6 - 1.02 * radius
      return circle([((i % 3) + 0.5) / 3 + room * x, (Math.floor(i / 3) + 0.5) / 3 + room * y], radius, -1, -1, null)
    })
    return plateOf([polygon([[0, 0], [1, 0], [1, 1], [0, 1]], null), ...circles])
  })

/** The field of such a plate from every source, each gap measured between every two edges. */
function bruteForce(plate: Plate): { x: number; y: number; size: number }[] {
  return plate.loops.flatMap((loop, l) =>
    loop.flatMap(({ curve }, e) => {
      const samples = Array.from({ length: 17 }, (_, i) => ({ at: pointOn(curve, i / 16), normal: outwardNormal(curve, i / 16) }))
      const gaps = samples.map(({ at: [x, y], normal }) => {
        const across = plate.loops.flatMap((other, m) =>
          other.map((edge, f) => {
            if (m === l && (f === e || (f - e + other.length) % other.length === 1 || (e - f + other.length) % other.length === 1)) return Infinity
            const [qx, qy] = nearestOn(edge.curve, x, y).at
            const distance = Math.hypot(qx - x, qy - y)
            return normal[0] * (x - qx) + normal[1] * (y - qy) > 0.5 * distance ? distance : Infinity
          })
        )
        return { x, y, size: Math.min(...across) }
      })
      if (curve.kind === 'line') return gaps
      // a quarter circle is divided by three for its thirds of a right angle, and each of them by two
      const arcs = Array.from({ length: 7 }, (_, i) => ({ at: pointOn(curve, i / 6), size: (curve.axes[0] * Math.PI) / 6 }))
      return [...gaps, ...arcs.map(({ at, size }) => ({ x: at[0], y: at[1], size }))]
    })
  )
}

describe('size field of a square with holes', () => {
  const anywhere = fc.array(fc.tuple(fc.double({ min: 0, max: 1, noNaN: true }), fc.double({ min: 0, max: 1, noNaN: true })), { minLength: 2, maxLength: 20 })

  it('is what all arcs and the gaps between every two edges give', () => {
    fc.assert(
      fc.property(holed, anywhere, (plate, points) => {
        const sources = bruteForce(plate)
        const size = sizeField(plate, { raiser: [], all: 0 })
        // where a source is left out that should not be, the field is too large at its own place
        for (const [x, y] of [...points, ...sources.map((s) => [s.x, s.y])]) {
          const expected = Math.min(...sources.map((s) => s.size + 0.75 * Math.hypot(x - s.x, y - s.y)))
          expectNear(size(x, y), expected, { rel: 1e-14, because: 'sources left out never ask for less; lengths are rounded' })
        }
      }),
      { seed: 12, numRuns: 40 }
    )
  })

  it('differs between two places by at most 0.75 of their distance, halved with all sizes', () => {
    fc.assert(
      fc.property(holed, anywhere, fc.integer({ min: -1, max: 3 }), (plate, points, all) => {
        const size = sizeField(plate, { raiser: [], all })
        points.slice(1).forEach(([x, y], i) => {
          const [px, py] = points[i]
          const most = 0.75 * 2 ** -all * Math.hypot(x - px, y - py)
          expect(Math.abs(size(x, y) - size(px, py))).toBeLessThanOrEqual(most + 1e-15)
        })
      }),
      { seed: 13, numRuns: 100 }
    )
  })
})

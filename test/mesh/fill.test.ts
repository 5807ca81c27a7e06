import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { buildPlate } from '../../src/case/build.ts'
import { lengthOf, pointOn, type Plate, type Point } from '../../src/case/plate.ts'
import { readCase } from '../../src/case/read.ts'
import { planCollar } from '../../src/mesh/collar.ts'
import { divideBoundary } from '../../src/mesh/divide.ts'
import { fillPlate, type Filling } from '../../src/mesh/fill.ts'
import { sizeField, type SizeField } from '../../src/mesh/size.ts'
import { smoothNodes } from '../../src/mesh/smooth.ts'
import { frontOf } from '../../src/mesh/strip.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'
import { expectNear } from '../support/near.ts'
import { randomCase } from '../support/random.ts'

/** Angles of all triangles, degrees. */
function anglesOf({ point, triangle }: Filling): number[] {
  return Array.from(triangle, (a, i) => {
    const first = i - (i % 3)
    const [b, c] = [triangle[first + ((i + 1) % 3)], triangle[first + ((i + 2) % 3)]]
    const [ux, uy, vx, vy] = [point[2 * b] - point[2 * a], point[2 * b + 1] - point[2 * a + 1], point[2 * c] - point[2 * a], point[2 * c + 1] - point[2 * a + 1]]
    return (Math.atan2(ux * vy - uy * vx, ux * vx + uy * vy) * 180) / Math.PI
  })
}

function fronted(seed: number): { plate: Plate; size: SizeField; front: ReturnType<typeof frontOf>['boundary'] } {
  const plate = buildPlate(readCase(JSON.stringify(randomCase(seed)), `seed ${seed}`))
  const size = sizeField(plate, { raiser: plate.raisers.map(() => 0), all: 0 })
  return { plate, size, front: frontOf(planCollar(plate, divideBoundary(plate, size))).boundary }
}

const seeds = Array.from({ length: 40 }, (_, i) => 1000 + i)

describe('triangles that fill a front', () => {
  it.each(seeds)('have every piece of it as a side, angles of 25 degrees at least and the wanted size: seed %i', (seed) => {
    const { plate, size, front } = fronted(seed)
    const filling = fillPlate(plate, front, size)
    const sides = new Set<string>()
    const { triangle, point } = filling
    triangle.forEach((a, i) => sides.add(`${a} ${triangle[i % 3 === 2 ? i - 2 : i + 1]}`))
    for (const { a, b } of filling.segments) expect(sides.has(`${a} ${b}`)).toBe(true)
    expect(Math.min(...anglesOf(filling))).toBeGreaterThan(24.999)
    for (let i = 0; i < triangle.length; i += 3) {
      const [a, b, c] = triangle.subarray(i, i + 3)
      const longest = Math.max(...[[a, b], [b, c], [c, a]].map(([p, q]) => Math.hypot(point[2 * p] - point[2 * q], point[2 * p + 1] - point[2 * q + 1])))
      // an equilateral triangle's side is sqrt(3) circumradii, and a circumradius is at most 0.75 sizes
      expect(longest).toBeLessThanOrEqual(1.5 * size((point[2 * a] + point[2 * b] + point[2 * c]) / 3, (point[2 * a + 1] + point[2 * b + 1] + point[2 * c + 1]) / 3) * 1.0001)
    }
  })

  it('halve pieces on arcs on the arc and the others in their middle', () => {
    for (const seed of seeds.slice(0, 10)) {
      const { plate, size, front } = fronted(seed)
      const { segments, point } = fillPlate(plate, front, (x, y) => size(x, y) / 3)
      expect(segments.length).toBeGreaterThan(front.segments.length)
      for (const { onEdge, a, b, loop, edge, t0, t1 } of segments) {
        const whole = front.segments.find((s) => s.loop === loop && s.edge === edge && s.onEdge === onEdge && s.t0 <= t0 && s.t1 >= t1)!
        const { curve } = plate.loops[loop][edge]
        for (const [v, t] of [[a, t0], [b, t1]]) {
          const share = (t - whole.t0) / (whole.t1 - whole.t0)
          const straight = [0, 1].map((k) => front.point[2 * whole.a + k] + share * (front.point[2 * whole.b + k] - front.point[2 * whole.a + k])) as unknown as Point
          const [x, y] = onEdge ? pointOn(curve, t) : straight
          expect(Math.hypot(point[2 * v] - x, point[2 * v + 1] - y)).toBeLessThan(1e-12 * (1 + lengthOf(curve)))
        }
      }
    }
  })

  it('are refined where right angles face undivided edges: their circumcentres lie on those', () => {
    const plate = plateOf([polygon([[0, 0], [1, 0], [1, 1], [0, 1]], null)])
    const { triangle } = fillPlate(plate, divideBoundary(plate, () => 10), () => 0.1)
    // none is larger than an equilateral triangle in a circle of 0.75 sizes: area 0.0073
    expect(triangle.length / 3).toBeGreaterThan(1 / 0.0074)
    expect(triangle.length / 3).toBeLessThan(600)
  })

  it('are as many as the size asks for: 100 000 of them', () => {
    const corners: Point[] = [[0, 0], [1, 0], [1, 1], [0, 1]]
    const plate = plateOf([polygon(corners, null)])
    const size = () => 0.0048
    const filling = fillPlate(plate, divideBoundary(plate, size), size)
    expect(filling.triangle.length / 3).toBeGreaterThan(80_000)
    expect(filling.triangle.length / 3).toBeLessThan(160_000)
    expect(Math.min(...anglesOf(filling).slice(0, 30_000))).toBeGreaterThan(24.999)
  })
})

/** Triangles without those that lie between two boundary pieces that meet at less than 25 degrees. */
function outsideCorners(filling: Filling): Filling {
  const pieces = new Set(filling.segments.map(({ a, b }) => `${a} ${b}`))
  const kept: number[] = []
  for (let i = 0; i < filling.triangle.length; i += 3) {
    const [a, b, c] = filling.triangle.subarray(i, i + 3)
    const isSharp = [[c, a, b], [a, b, c], [b, c, a]].some(([p, q, r]) => {
      const between = pieces.has(`${p} ${q}`) && pieces.has(`${q} ${r}`)
      return between && anglesOf({ ...filling, triangle: Int32Array.of(q, r, p) })[0] < 25
    })
    if (!isSharp) kept.push(a, b, c)
  }
  return { ...filling, triangle: Int32Array.from(kept) }
}

/** Area of all triangles. */
function areaOfTriangles({ point, triangle }: Filling): number {
  let twice = 0
  for (let i = 0; i < triangle.length; i += 3) {
    const [a, b, c] = [2 * triangle[i], 2 * triangle[i + 1], 2 * triangle[i + 2]]
    twice += (point[b] - point[a]) * (point[c + 1] - point[a + 1]) - (point[c] - point[a]) * (point[b + 1] - point[a + 1])
  }
  return twice / 2
}

/** A star-shaped polygon of unequal rays, some of its corners sharp, with a hole around the origin. */
const star = fc.array(fc.double({ min: 0.3, max: 1, noNaN: true }), { minLength: 3, maxLength: 12 }).map((rays) => {
  const corner = (ray: number, i: number): Point => [ray * Math.cos((2 * Math.PI * i) / rays.length), ray * Math.sin((2 * Math.PI * i) / rays.length)]
  return plateOf([polygon(rays.map(corner), null), circle([0, 0], 0.1, -1, -1, null)])
})

describe('triangles that fill any polygon around a hole', () => {
  const size = (x: number, y: number) => 0.03 + 0.3 * Math.hypot(x - 0.2, y)

  it('have every piece of the boundary as a side, its area, the wanted size and the same bits again', () => {
    fc.assert(
      fc.property(star, (plate) => {
        const filling = fillPlate(plate, divideBoundary(plate, size), size)
        const { point, triangle, segments } = filling
        const sides = new Set<string>()
        triangle.forEach((a, i) => sides.add(`${a} ${triangle[i % 3 === 2 ? i - 2 : i + 1]}`))
        let twice = 0
        for (const { a, b } of segments) {
          expect(sides.has(`${a} ${b}`)).toBe(true)
          twice += point[2 * a] * point[2 * b + 1] - point[2 * b] * point[2 * a + 1]
        }
        expectNear(areaOfTriangles(filling), twice / 2, { rel: 1e-13, because: 'the area that the pieces enclose' })
        expect(Math.min(...anglesOf(filling))).toBeGreaterThan(0)
        expect(Math.min(...anglesOf(outsideCorners(filling)))).toBeGreaterThan(24.999)
        for (const [a, b] of [...sides].map((side) => side.split(' ').map(Number))) {
          const middle = [0, 1].map((k) => (point[2 * a + k] + point[2 * b + k]) / 2)
          const length = Math.hypot(point[2 * a] - point[2 * b], point[2 * a + 1] - point[2 * b + 1])
          // circumradius at most 0.75 sizes at the centroid, where the size is at most a third of a side's 0.3 growth larger
          expect(length).toBeLessThan(1.5 * (size(middle[0], middle[1]) + 0.3 * length))
        }
        expect(fillPlate(plate, divideBoundary(plate, size), size)).toEqual(filling)
      }),
      { seed: 14, numRuns: 100 }
    )
  })

  it.each([20, 15, 5, 1, 0.1])('end in a corner of %f degrees with one triangle of that angle', (degrees) => {
    // sides of unequal length: their pieces at the corner differ, and would be halved in turns
    const corner: Point = [0.93 * Math.cos((degrees * Math.PI) / 180), 0.93 * Math.sin((degrees * Math.PI) / 180)]
    const plate = plateOf([polygon([[0, 0], [1, 0], [1.5, -0.3], [1.5, 0.5], corner], null)])
    const filling = fillPlate(plate, divideBoundary(plate, () => 0.1), () => 0.1)
    const angles = anglesOf(filling).sort((a, b) => a - b)
    expectNear(angles[0], degrees, { abs: 1e-9, because: 'the corner itself' })
    expect(filling.triangle.length - outsideCorners(filling).triangle.length).toBe(3)
    expect(Math.min(...anglesOf(outsideCorners(filling)))).toBeGreaterThan(24.999)
    expect(filling.triangle.length / 3).toBeLessThan(400 + 200 / degrees)
  })

  it('are graded over six powers of ten at a corner, and few in a bar of length 100 widths', () => {
    const corners: Point[] = [[0, 0], [1, 0], [1, 0.5], [0.5, 0.5], [0.5, 1], [0, 1]]
    const plate = plateOf([polygon(corners, null)])
    const size = (x: number, y: number) => 1e-6 + 0.75 * Math.hypot(x - 0.5, y - 0.5)
    const graded = fillPlate(plate, divideBoundary(plate, size), size)
    expect(Math.min(...anglesOf(graded))).toBeGreaterThan(24.999)
    expect(graded.triangle.length / 3).toBeLessThan(1000)
    const bar = plateOf([polygon([[0, 0], [1, 0], [1, 0.01], [0, 0.01]], null)])
    const along = sizeField(bar, { raiser: [], all: 0 })
    const filled = fillPlate(bar, divideBoundary(bar, along), along)
    expect(Math.min(...anglesOf(filled))).toBeGreaterThan(24.999)
    expect(filled.triangle.length / 3).toBeLessThan(400)
  })
})

describe('a boundary that cannot be filled', () => {
  const corners: Point[] = [[0, 0], [1, 0], [1, 1], [0, 1]]

  it.each([
    ['a hole that touches the edges', plateOf([polygon(corners, null), circle([0.5, 0.5], 0.5, -1, -1, null)])],
    ['two vertices in one place', plateOf([polygon([[0, 0], [1, 0], [1, 1], [0.5, 1], [0.5, 1], [0, 1]], null)])]
  ])('is told at once, with the place: %s', (_, plate) => {
    const size = () => 0.2
    expect(() => fillPlate(plate, divideBoundary(plate, size), size)).toThrow(/touches itself or is too sharp near/)
  })

  it('is told after a million vertices: a size of 0', () => {
    const plate = plateOf([polygon(corners, null)])
    expect(() => fillPlate(plate, divideBoundary(plate, () => 0.2), () => 0)).toThrow('the mesh refinement does not end: 1000000 vertices')
  }, 30_000)
})

describe('smoothing', () => {
  it('keeps all triangles upright and makes the least angles larger, never the worst one smaller', () => {
    for (const seed of seeds) {
      const { plate, size, front } = fronted(seed)
      const filling = fillPlate(plate, front, size)
      const [before, after] = [anglesOf(filling), anglesOf({ ...filling, point: smoothNodes(plate, { ...filling, element: filling.triangle, corners: 3 }) })]
      expect(Math.min(...after)).toBeGreaterThanOrEqual(Math.min(...before) - 1e-9)
      const below30 = (angles: number[]) => angles.filter((angle) => angle < 30).length
      expect(below30(after)).toBeLessThanOrEqual(below30(before))
    }
  })
})

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
import { plateOf, polygon } from '../support/plates.ts'
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

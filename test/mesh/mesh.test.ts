import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { areaOf, type Plate, type Point } from '../../src/case/plate.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { checkMesh, MeshError } from '../../src/mesh/check.ts'
import { elementCount, nodeCount, sideCount, type Mesh } from '../../src/mesh/mesh.ts'
import { sizeField } from '../../src/mesh/size.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'
import { expectNear } from '../support/near.ts'

const strip: Point[] = [[0, -0.1], [1, -0.1], [1, 0.1], [0, 0.1]]

function stripWith(...holes: [x: number, y: number, radius: number][]): Plate {
  return plateOf([polygon(strip, null), ...holes.map(([x, y, radius], i) => circle([x, y], radius, -1, i, null))])
}

const evenly = (plate: Plate, halvings = 0) => meshPlate(plate, { raiser: plate.raisers.map(() => halvings), all: 0 }, 'mixed')

describe('mesh of a plate', () => {
  it('passes its own check and adds up to the exact area: strip with one hole', () => {
    const plate = stripWith([0.5, 0, 0.04])
    const { area, smallestAngle, worstJacobian } = checkMesh(plate, evenly(plate))
    expectNear(area, 0.2 - Math.PI * 0.04 ** 2, { rel: 1e-12, because: 'elements are exactly curved' })
    expect(smallestAngle).toBeGreaterThan(24.99)
    expect(worstJacobian).toBeGreaterThan(0.3)
  })

  it('is the same to the bit on every run', () => {
    const plate = stripWith([0.31, 0.02, 0.03], [0.55, -0.03, 0.05])
    const [first, second] = [evenly(plate), evenly(plate)]
    expect(first.point).toEqual(second.point)
    expect(first.triangle).toEqual(second.triangle)
  })

  it('resolves a ligament of 2 % of the hole', () => {
    const plate = stripWith([0.5, 0.0492, 0.05])
    const mesh = evenly(plate)
    expect(checkMesh(plate, mesh).smallestAngle).toBeGreaterThan(24.99)
    // the gap is 0.0008: its elements are no longer than about that
    expect(longestSideNear(mesh, 0.5, 0.0996)).toBeLessThan(0.0025)
  })

  it('halves its sides near a raiser that is refined, and not far away', () => {
    const plate = stripWith([0.25, 0, 0.03], [0.75, 0, 0.03])
    const plain = evenly(plate)
    const refined = meshPlate(plate, { raiser: [2, 0], all: 0 }, 'mixed')
    expect(longestSideNear(refined, 0.28, 0)).toBeLessThan(0.6 * longestSideNear(plain, 0.28, 0))
    expect(longestSideNear(refined, 0.78, 0)).toBeGreaterThan(0.6 * longestSideNear(plain, 0.78, 0))
  })

  it('grows no faster than the size field allows', () => {
    const plate = stripWith([0.5, 0, 0.01])
    const size = sizeField(plate, { raiser: [0], all: 0 })
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1, noNaN: true }), fc.double({ min: -0.1, max: 0.1, noNaN: true }), (x, y) => {
        const here = size(x, y)
        expect(here).toBeGreaterThan(0)
        expect(Math.abs(size(x + 0.01, y) - here)).toBeLessThanOrEqual(0.75 * 0.01 + 1e-12)
      }),
      { seed: 3, numRuns: 100 }
    )
  })

  it('fits any strip with one to four holes, of any size, in any place', () => {
    const hole = fc.record({
      x: fc.double({ min: 0, max: 1, noNaN: true }),
      y: fc.double({ min: 0, max: 1, noNaN: true }),
      r: fc.double({ min: 0, max: 1, noNaN: true })
    })
    fc.assert(
      fc.property(fc.array(hole, { minLength: 1, maxLength: 4 }), (holes) => {
        const placed: [number, number, number][] = []
        holes.forEach(({ x, y, r }, i) => {
          // each in a quarter of the strip, with a ligament of at least 2 % of the diameter
          const radius = 0.002 + 0.085 * r
          const room = 0.1 - 1.04 * radius
          const along = 0.125 - 1.02 * radius
          placed.push([(i + 0.5) * 0.25 + (2 * x - 1) * along, (2 * y - 1) * room, radius])
        })
        const plate = stripWith(...placed)
        const mesh = evenly(plate)
        const { smallestAngle } = checkMesh(plate, mesh)
        expect(smallestAngle).toBeGreaterThan(24.99)
        expect(elementCount(mesh)).toBeLessThan(4000)
        expect(nodeCount(mesh) - sideCount(mesh) + elementCount(mesh)).toBe(1 - placed.length)
      }),
      { seed: 20, numRuns: 60 }
    )
  })
})

describe('check of a mesh', () => {
  const plate = stripWith([0.5, 0, 0.04])
  const mesh = evenly(plate)

  it('notices a triangle that is turned inside out', () => {
    const triangle = mesh.triangle.slice()
    ;[triangle[0], triangle[1]] = [triangle[1], triangle[0]]
    expect(() => checkMesh(plate, { ...mesh, triangle })).toThrow(MeshError)
  })

  it('notices a missing triangle', () => {
    const cut: Mesh = { ...mesh, triangle: mesh.triangle.slice(3), triangleSide: mesh.triangleSide.slice(3) }
    expect(() => checkMesh(plate, cut)).toThrow(MeshError)
  })

  it('notices a node that left the boundary, and one that moved an area', () => {
    const point = mesh.point.slice()
    const node = mesh.triangle[3 * mesh.boundary.element[0] + mesh.boundary.local[0]]
    point[2 * node] += 1e-6
    expect(() => checkMesh(plate, { ...mesh, point })).toThrow(MeshError)
  })

  it('notices a boundary with a gap', () => {
    const span = mesh.boundary.span.slice()
    span[1] += 1e-9
    expect(() => checkMesh(plate, { ...mesh, boundary: { ...mesh.boundary, span } })).toThrow(MeshError)
  })
})

describe('area of a loop', () => {
  it('is exact for polygons, circles and ellipses', () => {
    expectNear(areaOf(polygon(strip, null)), 0.2, { rel: 1e-15, because: 'rectangle' })
    expectNear(areaOf(circle([3, -2], 0.7, 1, -1, null)), Math.PI * 0.49, { rel: 1e-14, because: 'circle off the origin' })
    expectNear(areaOf(circle([3, -2], 0.7, -1, -1, null)), -Math.PI * 0.49, { rel: 1e-14, because: 'clockwise' })
  })
})

function longestSideNear(mesh: Mesh, x: number, y: number): number {
  let longest = 0
  let nearest = Infinity
  for (let t = 0; t < mesh.triangle.length / 3; t++) {
    const p = [0, 1, 2].map((k) => {
      const node = mesh.triangle[3 * t + k]
      return [mesh.point[2 * node], mesh.point[2 * node + 1]]
    })
    const distance = Math.hypot((p[0][0] + p[1][0] + p[2][0]) / 3 - x, (p[0][1] + p[1][1] + p[2][1]) / 3 - y)
    if (distance >= nearest) continue
    nearest = distance
    longest = Math.max(...p.map((q, k) => Math.hypot(q[0] - p[(k + 1) % 3][0], q[1] - p[(k + 1) % 3][1])))
  }
  return longest
}

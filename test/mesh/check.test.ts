import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { circularArc, type Point } from '../../src/case/plate.ts'
import { checkMesh, MeshError } from '../../src/mesh/check.ts'
import type { Segment } from '../../src/mesh/divide.ts'
import { proveJacobian } from '../../src/mesh/jacobian.ts'
import { bulgeOf, mapPoint, type ElementMap } from '../../src/mesh/map.ts'
import { numberSides } from '../../src/mesh/number.ts'
import { expectNear } from '../support/near.ts'
import { plateOf, polygon } from '../support/plates.ts'

/** Jacobian of a map at a point of its reference element. */
function jacobianAt(map: ElementMap, xi: number, eta: number): number {
  const out = new Float64Array(6)
  mapPoint(map, xi, eta, out)
  return out[2] * out[5] - out[3] * out[4]
}

const straight = (...corner: number[]): ElementMap => ({
  corner: Float64Array.from(corner),
  bulge: Array.from({ length: corner.length / 2 }, () => null),
  curved: false
})

/** An element with corners on the circle of radius 1 from angle a over `sweep`, the other corners as given; exact on that side. */
function onArc(a: number, sweep: number, order: number, ...others: number[]): ElementMap {
  const arc = circularArc([0, 0], 1, a, sweep)
  const bulge = [bulgeOf(arc, 0, 1, order), ...Array.from({ length: others.length / 2 + 1 }, () => null)]
  return { corner: Float64Array.of(...arc.from, ...arc.to, ...others), bulge, curved: bulge[0] !== null }
}

describe('the proof that a Jacobian is positive', () => {
  it('takes good elements, straight and curved, and finds their shape', () => {
    expect(proveJacobian(straight(0, 0, 1, 0, 0.5, Math.sqrt(3) / 2))).toMatchObject({ positive: true })
    expectNear(proveJacobian(straight(0, 0, 1, 0, 0.5, Math.sqrt(3) / 2)).worstShape, 1, { abs: 1e-12, because: 'equilateral' })
    expectNear(proveJacobian(straight(0, 0, 2, 0, 2, 1, 0, 1)).worstShape, 1, { abs: 1e-12, because: 'a rectangle' })
    // material outside the circle (the side runs clockwise) and inside it
    expect(proveJacobian(onArc(0.7, -0.7, 5, 1.6, -0.1, 1.3, 1.2)).positive).toBe(true)
    expect(proveJacobian(onArc(0, 0.7, 5, 0.2, 0.2)).positive).toBe(true)
  })

  it('refuses a concave quad, a triangle that runs clockwise, and one without area', () => {
    expect(proveJacobian(straight(0, 0, 1, 0, 0.2, 0.2, 0, 1)).positive).toBe(false)
    expect(proveJacobian(straight(0, 0, 0, 1, 1, 0)).positive).toBe(false)
    expect(proveJacobian(straight(0, 0, 1, 0, 2, 0)).positive).toBe(false)
  })

  it('refuses a curved triangle whose arc reaches its far corner, and takes it where it stays clear of it', () => {
    // the arc from 45 to -45 degrees bulges to x = 1; the far corner lies just inside or outside
    expect(proveJacobian(onArc(0.75, -1.5, 5, 0.98, 0)).positive).toBe(false)
    expect(proveJacobian(onArc(0.75, -1.5, 5, 1.5, 0)).positive).toBe(true)
  })

  it('never passes an element that is inside out somewhere', () => {
    const number = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    let passed = 0
    fc.assert(
      fc.property(number(0, 6), number(-0.8, 0.8), number(-2, 2), number(-2, 2), number(-2, 2), number(-2, 2), fc.boolean(), (a, sweep, x, y, u, v, quad) => {
        fc.pre(Math.abs(sweep) > 0.05)
        const map = quad ? onArc(a, sweep, 5, x, y, u, v) : onArc(a, sweep, 5, x, y)
        if (!proveJacobian(map).positive) return
        passed++
        for (let i = 0; i <= 20; i++) {
          for (let j = 0; j <= 20; j++) {
            if (!quad && i + j > 20) continue
            const [xi, eta] = quad ? [i / 10 - 1, j / 10 - 1] : [i / 20, j / 20]
            expect(jacobianAt(map, xi, eta)).toBeGreaterThan(0)
          }
        }
      }),
      { seed: 5, numRuns: 3000 }
    )
    // the property says something
    expect(passed).toBeGreaterThan(200)
  })
})

describe('checkMesh', () => {
  const corners: Point[] = [[0, 0], [2, 0], [2, 1], [0, 1]]
  const plate = plateOf([polygon(corners, null)])
  const point = [...corners.flat(), 1, 0, 1, 1]
  const side = (edge: number, a: number, b: number, t0: number, t1: number): Segment => ({ onEdge: true, loop: 0, edge, a, b, t0, t1 })
  const segments = [side(0, 0, 4, 0, 0.5), side(0, 4, 1, 0.5, 1), side(1, 1, 2, 0, 1), side(2, 2, 5, 0, 0.5), side(2, 5, 3, 0.5, 1), side(3, 3, 0, 0, 1)]
  const good = { triangle: [0, 4, 5, 0, 5, 3], quad: [4, 1, 2, 5] }
  const checked = ({ triangle, quad }: typeof good, pieces = segments, at = point) =>
    checkMesh(plate, numberSides(Float64Array.from(at), Int32Array.from(triangle), Int32Array.from(quad), pieces))

  it('takes a mesh of two triangles and a quad', () => {
    const { area, smallestAngle } = checked(good)
    expect(area).toBe(2)
    expectNear(smallestAngle, 45, { abs: 1e-10, because: 'halves of unit squares' })
  })

  it.each([
    ['a missing element', { ...good, triangle: [0, 4, 5] }, segments],
    ['an element twice', { ...good, triangle: [...good.triangle, 0, 5, 3] }, segments],
    ['a gap in the boundary', good, segments.filter((_, i) => i !== 2)],
    ['pieces of an edge that overlap', good, segments.map((s, i) => (i === 1 ? { ...s, t0: 0.4 } : s))],
    ['an element that runs clockwise', { ...good, triangle: [0, 5, 4, 0, 5, 3] }, segments]
  ])('refuses %s', (_, elements, pieces) => {
    expect(() => checked(elements, pieces)).toThrow(MeshError)
  })

  it('refuses a node off the boundary', () => {
    expect(() => checked(good, segments, [...corners.flat(), 1, 0.01, 1, 1])).toThrow(/off the boundary/)
  })
})

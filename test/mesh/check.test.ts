import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { circularArc, type Curve, type Plate, type Point } from '../../src/case/plate.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { checkMesh, MeshError } from '../../src/mesh/check.ts'
import type { Segment } from '../../src/mesh/divide.ts'
import { proveJacobian } from '../../src/mesh/jacobian.ts'
import { bulgeOf, mapPoint, type Bulge, type ElementMap } from '../../src/mesh/map.ts'
import type { Mesh } from '../../src/mesh/mesh.ts'
import { numberSides } from '../../src/mesh/number.ts'
import { expectNear } from '../support/near.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'

// 3---------4---------5   height 1
// |         | \       |
// |  quad   |  \  t1  |
// |         | t0 \    |
// 0---------1---------2   width 1 each
const NODES = [0, 0, 1, 0, 2, 0, 0, 1, 1, 1, 2, 1]
const TRIANGLES = [1, 2, 4, 2, 5, 4]
const QUADS = [0, 1, 4, 3]
const BOX: Point[] = [[0, 0], [2, 0], [2, 1], [0, 1]]
const SEGMENTS = [piece(0, 1, 0, 0, 0.5), piece(1, 2, 0, 0.5, 1), piece(2, 5, 1, 0, 1), piece(5, 4, 2, 0, 0.5), piece(4, 3, 2, 0.5, 1), piece(3, 0, 3, 0, 1)]

function piece(a: number, b: number, edge: number, t0: number, t1: number, loop = 0): Segment {
  return { onEdge: true, a, b, loop, edge, t0, t1 }
}

const box = plateOf([polygon(BOX, null)])

function boxMesh({ nodes = NODES, triangles = TRIANGLES, quads = QUADS, segments = SEGMENTS } = {}): Mesh {
  return numberSides(Float64Array.from(nodes), Int32Array.from(triangles), Int32Array.from(quads), segments)
}

describe('a mesh made by hand', () => {
  it('passes, with its exact area, smallest angle and shape', () => {
    const { area, smallestAngle, worstShape } = checkMesh(box, boxMesh())
    expectNear(area, 2, { rel: 1e-15, because: 'two squares' })
    expectNear(smallestAngle, 45, { rel: 1e-14, because: 'half squares' })
    expectNear(worstShape, Math.sqrt(2 / 3), { rel: 1e-14, because: 'sine of 45 over that of 60 degrees' })
  })

  it('has shape 1 in a rectangle of one quad', () => {
    const edges = [piece(0, 1, 0, 0, 1), piece(1, 2, 1, 0, 1), piece(2, 3, 2, 0, 1), piece(3, 0, 3, 0, 1)]
    const mesh = boxMesh({ nodes: BOX.flat(), triangles: [], quads: [0, 1, 2, 3], segments: edges })
    expect(checkMesh(box, mesh)).toEqual({ area: 2, smallestAngle: 90, worstShape: 1, worstJacobian: 1 })
  })

  const whole = boxMesh()
  const nodesWith = (node: number, x: number, y: number) => NODES.map((old, i) => (i === 2 * node ? x : i === 2 * node + 1 ? y : old))
  const broken: [what: string, mesh: Mesh, says: string][] = [
    ['a missing triangle', { ...whole, triangle: whole.triangle.slice(3), triangleSide: whole.triangleSide.slice(3) }, 'belongs to'],
    ['an element that is there twice', boxMesh({ triangles: [...TRIANGLES, 1, 2, 4] }), 'belongs to'],
    ['sides that are not those of the nodes', { ...whole, quadSide: whole.quadSide.toReversed() }, 'other nodes'],
    ['two elements on one side of a side', boxMesh({ triangles: [1, 2, 4, 5, 2, 4] }), 'same side'],
    ['a side inside that is taken for one of the boundary', { ...whole, sideBoundary: whole.sideBoundary.map((b) => (b < 0 ? 0 : b)) }, 'side'],
    ['a node off the boundary', boxMesh({ nodes: nodesWith(1, 1, -1e-16) }), 'off the boundary'],
    ['a node on the boundary in the wrong place', boxMesh({ nodes: nodesWith(1, 1 + 1e-15, 0) }), 'off the boundary'],
    ['a gap in the boundary', boxMesh({ segments: SEGMENTS.map((s, i) => (i === 1 ? { ...s, t0: 0.5 + 1e-15 } : s)) }), 'gap'],
    ['an edge that ends too early', boxMesh({ segments: SEGMENTS.map((s, i) => (i === 2 ? { ...s, t1: 1 - 1e-15 } : s)) }), 'off the boundary'],
    ['an edge without sides', boxMesh({ segments: SEGMENTS.slice(0, 5) }), 'belongs to'],
    ['sides of an edge that the plate has not', boxMesh({ segments: [...SEGMENTS.slice(0, 5), piece(3, 0, 4, 0, 1)] }), 'covered'],
    ['a node of no element', boxMesh({ nodes: [...NODES, 0.3, 0.3] }), 'nodes - sides + elements is 2, not 1']
  ]
  it.each(broken)('is refused with %s', (_, mesh, says) => {
    expect(() => checkMesh(box, mesh)).toThrow(MeshError)
    expect(() => checkMesh(box, mesh)).toThrow(says)
  })

  it('is refused with boundary sides out of order', () => {
    const { boundary } = whole
    const swapped = { ...boundary }
    for (const key of ['side', 'element', 'local', 'loop', 'edge'] as const) swapped[key] = swap(boundary[key])
    swapped.span = Float64Array.of(0.5, 1, 0, 0.5, ...boundary.span.slice(4))
    const sideBoundary = whole.sideBoundary.map((b) => (b === 0 ? 1 : b === 1 ? 0 : b))
    expect(() => checkMesh(box, { ...whole, boundary: swapped, sideBoundary })).toThrow('gap at boundary side 0')
  })

  it('is refused with a boundary side that names another element or local side', () => {
    const { boundary } = whole
    const element = boundary.element.map((e, b) => (b === 0 ? 0 : e))
    const local = boundary.local.map((k, b) => (b === 0 ? 1 : k))
    for (const wrong of [{ ...boundary, element }, { ...boundary, local }]) {
      expect(() => checkMesh(box, { ...whole, boundary: wrong })).toThrow('boundary side 0 is not the side of its element')
    }
  })

  it('is refused where two nodes stand for one place of the boundary', () => {
    // the lower middle node once for the quad, once for the triangle: a crack
    const mesh = boxMesh({ nodes: [...NODES, 1, 0], triangles: [6, 2, 4, 2, 5, 4], segments: SEGMENTS.map((s, i) => (i === 1 ? { ...s, a: 6 } : s)) })
    expect(() => checkMesh(box, mesh)).toThrow(MeshError)
  })

  it('is refused where a raiser has no boundary side', () => {
    const bare: Plate = { ...box, raisers: [{ id: 'bore', kind: 'hole', sharp: null, loop: 0, box: [0, 0, 0, 0], shape: 'circle' }] }
    expect(() => checkMesh(bare, whole)).toThrow('no boundary side belongs to bore')
  })

  it('is refused where it has a hole that the plate has not', () => {
    // a ring of four quads round a hole of 0.2 by 0.2, on a plate that has none
    const ring = [0, 0, 1, 0, 1, 1, 0, 1, 0.4, 0.4, 0.6, 0.4, 0.6, 0.6, 0.4, 0.6]
    const quads = [0, 1, 5, 4, 1, 2, 6, 5, 2, 3, 7, 6, 3, 0, 4, 7]
    const square: Point[] = [[0, 0], [1, 0], [1, 1], [0, 1]]
    const hole: Point[] = [[0.4, 0.4], [0.4, 0.6], [0.6, 0.6], [0.6, 0.4]]
    const outer = [0, 1, 2, 3].map((i) => piece(i, (i + 1) % 4, i, 0, 1))
    const inner = [4, 7, 6, 5].map((a, i, around) => piece(a, around[(i + 1) % 4], i, 0, 1, 1))
    const mesh = boxMesh({ nodes: ring, triangles: [], quads, segments: [...outer, ...inner] })
    const withHole = plateOf([polygon(square, null), polygon(hole, null)])
    expectNear(checkMesh(withHole, mesh).area, 0.96, { rel: 1e-15, because: '1 - 0.2 squared' })
    expect(() => checkMesh(plateOf([polygon(square, null)]), mesh)).toThrow('boundary sides out of order')
  })

  it('is refused with a quad that has a concave corner', () => {
    // the quad's corner at (0.8, 0.6) is concave
    const outline: Point[] = [[0, 0], [0.8, 0.6], [2, 1], [0, 1]]
    const edges = [0, 1, 2, 3].map((i) => piece(i, (i + 1) % 4, i, 0, 1))
    const mesh = boxMesh({ nodes: outline.flat(), triangles: [], quads: [0, 1, 2, 3], segments: edges })
    expect(() => checkMesh(plateOf([polygon(outline, null)]), mesh)).toThrow('quad 0 is turned inside out')
  })

  it('is refused with a triangle that is turned inside out', () => {
    // the inner node of four triangles, moved out of the box: each side still has its elements on either side of it
    const fan = { triangles: [0, 1, 4, 1, 2, 4, 2, 3, 4, 3, 0, 4], quads: [], segments: [0, 1, 2, 3].map((i) => piece(i, (i + 1) % 4, i, 0, 1)) }
    expect(checkMesh(box, boxMesh({ ...fan, nodes: [...BOX.flat(), 1.2, 0.4] })).area).toBe(2)
    expect(() => checkMesh(box, boxMesh({ ...fan, nodes: [...BOX.flat(), 1.2, -0.01] }))).toThrow('triangle 0 is turned inside out')
  })
})

/** The plate between an apex and an arc of radius 1 around (0, 0) that turns by `radians`, its top at (0, 1); one triangle. */
function capPlate(radians: number, apex: Point): { plate: Plate; mesh: Mesh } {
  const arc = circularArc([0, 0], 1, Math.PI / 2 + radians / 2, -radians)
  const chain: Curve[] = [arc, { kind: 'line', from: arc.to, to: apex }, { kind: 'line', from: apex, to: arc.from }]
  const plain = polygon([[0, 0], [1, 0], [0, 1]], null)
  const plate = plateOf([plain.map((edge, i) => ({ ...edge, curve: chain[i] }))])
  const edges = [piece(0, 1, 0, 0, 1), piece(1, 2, 1, 0, 1), piece(2, 0, 2, 0, 1)]
  return { plate, mesh: boxMesh({ nodes: [...arc.from, ...arc.to, ...apex], triangles: [0, 1, 2], quads: [], segments: edges }) }
}

describe('a mesh of one triangle above a round hole', () => {
  // the arc bulges upwards into the triangle; ends at (-+sin 0.4, cos 0.4), its top at (0, 1)
  it('passes while the arc stays inside, with the angles of its curved corners in the shape', () => {
    const { plate, mesh } = capPlate(0.8, [0, Math.cos(0.4) + Math.sin(0.4) * Math.sqrt(3)])
    const { worstShape, smallestAngle } = checkMesh(plate, mesh)
    expectNear(smallestAngle, 60, { rel: 1e-12, because: 'its chords are an equilateral triangle' })
    // between tangent and side the corner has 60 degrees less half the arc's turn, but the tangent of the map is longer there
    expect(worstShape).toBeLessThan(Math.sin(Math.PI / 3 - 0.4) * (2 / Math.sqrt(3)) + 1e-12)
    expect(worstShape).toBeGreaterThan(0.4)
  })

  it('is refused where the arc crosses the other sides, though its chord does not', () => {
    const { plate, mesh } = capPlate(0.8, [0, 0.995])
    expect(() => checkMesh(plate, mesh)).toThrow(/triangle 0, with (parabolic|exact) sides, is turned inside out/)
  })

  it('passes nearly degenerate, just above the height where its sides touch the arc', () => {
    // the tangents at the arc's ends meet at height 1 / cos 0.4
    const height = 1 / Math.cos(0.4)
    const above = capPlate(0.8, [0, height + 0.01])
    expect(checkMesh(above.plate, above.mesh).worstShape).toBeGreaterThan(0)
    expect(checkMesh(above.plate, above.mesh).worstShape).toBeLessThan(0.06)
    const below = capPlate(0.8, [0, height - 0.01])
    expect(() => checkMesh(below.plate, below.mesh)).toThrow(MeshError)
  })
})

describe('proof of a positive Jacobian', () => {
  const jacobian = (map: ElementMap, xi: number, eta: number): number => {
    const at = new Float64Array(6)
    mapPoint(map, xi, eta, at)
    return at[2] * at[5] - at[3] * at[4]
  }
  const unit = fc.double({ min: 0, max: 1, noNaN: true })
  const corners = (count: number) =>
    fc.array(fc.tuple(unit, unit), { minLength: count, maxLength: count }).map((shifts) =>
      // a regular polygon whose corners wander, some so far that it turns inside out
      Float64Array.from(shifts.flatMap(([x, y], k) => [
        Math.cos((2 * Math.PI * k) / count) + 1.4 * (x - 0.5),
        Math.sin((2 * Math.PI * k) / count) + 1.4 * (y - 0.5)
      ])))
  const elements = fc.integer({ min: 3, max: 4 }).chain((count) =>
    fc.tuple(corners(count), fc.array(fc.tuple(unit, unit, unit), { minLength: count, maxLength: count }), fc.integer({ min: 1, max: 9 })))

  /** An element whose sides named in `which` (bits) are arcs of up to 116 degrees between their corners, bulging to either side. */
  function elementOf(corner: Float64Array, turns: readonly (readonly number[])[], which: number): ElementMap {
    const count = corner.length / 2
    const bulge = turns.map(([turn, order], k): Bulge | null => {
      if (((which >> k) & 1) === 0) return null
      const from: Point = [corner[2 * k], corner[2 * k + 1]]
      const next = (k + 1) % count
      const to: Point = [corner[2 * next], corner[2 * next + 1]]
      const half = (turn - 0.5) * 2
      if (Math.abs(half) < 1e-3) return null
      // the centre lies at the distance chord / 2 / tan(half) to the left of the chord where the arc runs counter-clockwise
      const back = 0.5 / Math.tan(half)
      const centre: Point = [(from[0] + to[0]) / 2 - back * (to[1] - from[1]), (from[1] + to[1]) / 2 + back * (to[0] - from[0])]
      const radius = Math.hypot(from[0] - centre[0], from[1] - centre[1])
      const start = Math.atan2(from[1] - centre[1], from[0] - centre[0])
      return bulgeOf(circularArc(centre, radius, start, 2 * half, { from, to }), 0, 1, order < 0.3 ? 2 : 8)
    })
    return { corner, bulge, curved: bulge.some((side) => side !== null) }
  }

  it('never passes an element that is inside out at one of 10 000 random points', () => {
    const numbers = fc.sample(fc.tuple(unit, unit), { seed: 8, numRuns: 10_000 })
    let passed = 0
    let passedCurved = 0
    let wrongly = 0
    fc.assert(
      fc.property(elements, ([corner, turns, which]) => {
        const map = elementOf(corner, turns, which)
        const proof = proveJacobian(map)
        if (!proof.positive) return
        passed++
        if (map.curved) passedCurved++
        for (const [p, q] of numbers) {
          const [xi, eta] = corner.length === 8 ? [2 * p - 1, 2 * q - 1] : p + q > 1 ? [1 - p, 1 - q] : [p, q]
          if (!(jacobian(map, xi, eta) > 0)) wrongly++
        }
        expect(proof.worstShape).toBeGreaterThan(0)
        expect(proof.worstShape).toBeLessThanOrEqual(1)
      }),
      { seed: 11, numRuns: 200 }
    )
    expect(wrongly).toBe(0)
    expect(passed).toBeGreaterThan(60)
    expect(passedCurved).toBeGreaterThan(30)
  })

  it('passes every element that is the right way round on a fine lattice, but for nearly degenerate ones', () => {
    let positive = 0
    let undecided = 0
    fc.assert(
      fc.property(elements, ([corner, turns, which]) => {
        const map = elementOf(corner, turns, which)
        let least = Infinity
        let longest = 0
        const n = 40
        for (let i = 0; i <= n; i++) {
          for (let j = 0; j <= (corner.length === 8 ? n : n - i); j++) {
            const [xi, eta] = corner.length === 8 ? [(2 * i) / n - 1, (2 * j) / n - 1] : [i / n, j / n]
            least = Math.min(least, jacobian(map, xi, eta))
          }
        }
        for (let k = 2; k < corner.length; k++) longest = Math.max(longest, Math.abs(corner[k] - corner[k - 2]))
        if (least < 0.02 * longest ** 2) return
        positive++
        if (!proveJacobian(map).positive) undecided++
      }),
      { seed: 12, numRuns: 1000 }
    )
    expect(undecided).toBe(0)
    expect(positive).toBeGreaterThan(300)
  })

  it('finds a quad with a concave corner inside out, and one with three corners in a line', () => {
    const quad = (x: number, y: number): ElementMap => ({ corner: Float64Array.of(0, 0, x, y, 2, 0, 1, 2), bulge: [], curved: false })
    expect(proveJacobian(quad(1, 0.1)).positive).toBe(false)
    expect(proveJacobian(quad(1, 0.1)).least).toBeLessThan(0)
    expect(proveJacobian(quad(1, 0)).positive).toBe(false)
    expect(proveJacobian(quad(1, -0.01)).positive).toBe(true)
  })

  it('needs few cells even for the coarsest arc that the mesher makes', () => {
    // an equilateral triangle above an arc of 46 degrees
    const corner = Float64Array.of(-1, 0, 1, 0, 0, Math.sqrt(3))
    const radius = 1 / Math.sin(0.4)
    const arc = circularArc([0, -radius * Math.cos(0.4)], radius, Math.PI / 2 + 0.4, -0.8)
    for (const order of [2, 8]) {
      const { positive, cells } = proveJacobian({ corner, bulge: [bulgeOf(arc, 0, 1, order), null, null], curved: true })
      expect(positive).toBe(true)
      expect(cells).toBeLessThanOrEqual(5)
    }
  })

  it('does not depend on which corner comes first', () => {
    const arc = circularArc([0, -1], Math.SQRT2, (3 * Math.PI) / 4, -Math.PI / 2)
    const corner = [-1, 0, 1, 0, 0.3, 1.6]
    const bulge = [bulgeOf(arc, 0, 1, 8), null, null]
    const shapes = [0, 1, 2].map((first) => {
      const order = [0, 1, 2].map((k) => (k + first) % 3)
      const map = { corner: Float64Array.from(order.flatMap((k) => [corner[2 * k], corner[2 * k + 1]])), bulge: order.map((k) => bulge[k]), curved: true }
      return proveJacobian(map)
    })
    for (const { cells, least, worstShape } of shapes) {
      expect(cells).toBe(shapes[0].cells)
      expectNear(least, shapes[0].least, { rel: 1e-12, because: 'the same element' })
      expectNear(worstShape, shapes[0].worstShape, { rel: 1e-12, because: 'the same element' })
    }
  })
})

describe('quality of a mesh', () => {
  it('is that of its worst element: a strip with a hole', () => {
    const plate = plateOf([polygon([[0, -0.1], [1, -0.1], [1, 0.1], [0, 0.1]], null), circle([0.5, 0], 0.04, -1, 0, null)])
    const { worstShape } = checkMesh(plate, meshPlate(plate, { raiser: [0], all: 0 }, 'mixed'))
    // a straight triangle's least angle of 25 degrees has the shape 0.488; curved corners may be a bit below
    expect(worstShape).toBeGreaterThan(0.3)
    expect(worstShape).toBeLessThan(1)
  })
})

function swap(list: Int32Array): Int32Array {
  return Int32Array.of(list[1], list[0], ...list.slice(2))
}

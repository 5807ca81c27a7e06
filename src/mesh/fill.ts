// Triangles in a plate whose boundary is divided: Delaunay refinement.
// J. Ruppert, J. Algorithms 18 (1995) 548; J.R. Shewchuk, Comput. Geom. 22 (2002) 21. The first triangulation of the boundary's
// vertices is made by delaunator (which knows no boundary: segments that it misses are halved until all are there), the
// void is cut away, and then vertices go in one at a time (A. Bowyer, D.F. Watson, 1981): the middle of a segment that has
// an obtuse angle opposite it, else the circumcentre of a triangle that is too flat or too large. A segment on an arc is halved
// on the arc. Cost: about constant a vertex.

import Delaunator from 'delaunator'
import { incircle, orient2d } from 'robust-predicates'
import { pointOn } from '../case/plate.ts'
import type { Plate, Point } from '../case/plate.ts'
import type { DividedBoundary, Segment } from './divide.ts'
import type { SizeField } from './size.ts'

/** Triangles that fill the plate; `segments` are the boundary's, with those that had to be halved replaced by their halves. */
export interface Filling {
  /** (x, y) a vertex. */
  readonly point: Float64Array
  /** Three vertices a triangle, counter-clockwise. */
  readonly triangle: Int32Array
  readonly segments: readonly Segment[]
}

/** Circumradius over shortest edge of a triangle whose smallest angle is 25 degrees: 1 / (2 sin 25). */
const FLATNESS = 1.183
/** A triangle is too large when its circumradius exceeds this part of the wanted side length (an equilateral one: 0.58). */
const LARGE = 0.75
/** More vertices than any sensible plate needs: a refinement that gets here would never end. */
const MOST_VERTICES = 2_000_000

/**
 * Fills the plate with triangles of the wanted size, every boundary segment an edge of exactly one of them.
 * @throws Error when the refinement does not end (a bug: edges that meet at less than 60 degrees are not made by any case)
 */
export function fillPlate(plate: Plate, boundary: DividedBoundary, size: SizeField): Filling {
  const start = recoverBoundary(plate, boundary)
  return refine(plate, start.point, start.segments, start.triangle, size)
}

function halve(segment: Segment, middle: number): [Segment, Segment] {
  const t = (segment.t0 + segment.t1) / 2
  return [
    { ...segment, b: middle, t1: t },
    { ...segment, a: middle, t0: t }
  ]
}

function middleOf(plate: Plate, point: ArrayLike<number>, { onEdge, a, b, loop, edge, t0, t1 }: Segment): Point {
  if (!onEdge) return [(point[2 * a] + point[2 * b]) / 2, (point[2 * a + 1] + point[2 * b + 1]) / 2]
  return pointOn(plate.loops[loop][edge].curve, (t0 + t1) / 2)
}

/** Delaunay triangles of the boundary's vertices inside the plate, with missing segments halved until none is missing. */
function recoverBoundary(plate: Plate, boundary: DividedBoundary) {
  const point = [...boundary.point]
  let segments = boundary.segments
  for (;;) {
    const { triangles, halfedges } = new Delaunator(Float64Array.from(point))
    // delaunator's triangles are clockwise where y points up: half-edge e runs from its end to its start for us
    const count = point.length / 2
    const halfedgeFrom = new Map<number, number>()
    for (let e = 0; e < triangles.length; e++) {
      const next = e % 3 === 2 ? e - 2 : e + 1
      halfedgeFrom.set(triangles[next] * count + triangles[e], e)
    }
    const missing = segments.filter(({ a, b }) => !halfedgeFrom.has(a * count + b))
    if (missing.length === 0) {
      const seeds = segments.map(({ a, b }) => halfedgeFrom.get(a * count + b)!)
      return { point, segments, triangle: keepInside(triangles, halfedges, seeds) }
    }
    const lost = new Set(missing)
    segments = segments.flatMap((segment) => {
      if (!lost.has(segment)) return [segment]
      const middle = point.push(...middleOf(plate, point, segment)) / 2 - 1
      return halve(segment, middle)
    })
    if (point.length > 2 * MOST_VERTICES) throw new Error('the boundary was not recovered')
  }
}

/** Triangles reached from the boundary's inner half-edges without crossing the boundary, turned counter-clockwise. */
function keepInside(triangles: ArrayLike<number>, halfedges: ArrayLike<number>, seeds: readonly number[]): Int32Array {
  const wall = new Set(seeds)
  const inside = new Uint8Array(triangles.length / 3)
  const stack = seeds.map((e) => Math.floor(e / 3))
  const kept: number[] = []
  while (stack.length > 0) {
    const t = stack.pop()!
    if (inside[t]) continue
    inside[t] = 1
    for (let e = 3 * t; e < 3 * t + 3; e++) {
      if (!wall.has(e) && halfedges[e] >= 0) stack.push(Math.floor(halfedges[e] / 3))
    }
  }
  inside.forEach((yes, t) => {
    if (yes) kept.push(triangles[3 * t], triangles[3 * t + 2], triangles[3 * t + 1])
  })
  return Int32Array.from(kept)
}

/** An Int32Array or Float64Array of at least twice the length, with the same beginning. */
function grown<T extends Int32Array | Float64Array>(array: T): T {
  const larger = new (array.constructor as new (length: number) => T)(2 * array.length)
  larger.set(array)
  return larger
}

/** The refinement itself, on a triangulation kept as vertices and neighbours a triangle. */
function refine(plate: Plate, startPoint: number[], startSegments: readonly Segment[], startTriangle: Int32Array, size: SizeField): Filling {
  let vertexCount = startPoint.length / 2
  let point = new Float64Array(Math.max(64, 4 * startPoint.length))
  point.set(startPoint)
  const segments = [...startSegments]
  // vertex k of triangle t at 3t + k; across its edge k (from vertex k to k + 1) lies neighbour[3t + k], or -1 - segment
  let triangleCount = startTriangle.length / 3
  let vertex = new Int32Array(Math.max(192, 4 * startTriangle.length))
  vertex.set(startTriangle)
  let neighbour = new Int32Array(vertex.length)
  let mark = new Int32Array(vertex.length / 3)
  let stamp = 0
  // the triangle that each segment bounds, and a work list of segments and triangles to look at
  const beside: number[] = segments.map(() => -1)
  const suspectSegments: number[] = []
  let suspects: number[] = []
  linkNeighbours()

  const cavity: number[] = []
  const rim: number[] = [] // four numbers an edge: from, to, what lies outside, the triangle inside
  let fanAt = new Int32Array(point.length / 2)

  function linkNeighbours(): void {
    const edges = new Map<number, number>()
    for (let t = 0; t < triangleCount; t++) {
      for (let k = 0; k < 3; k++) edges.set(vertex[3 * t + k] * vertexCount + vertex[3 * t + ((k + 1) % 3)], 3 * t + k)
    }
    neighbour.fill(-1)
    segments.forEach(({ a, b }, s) => {
      const e = edges.get(a * vertexCount + b)!
      neighbour[e] = -1 - s
      beside[s] = Math.floor(e / 3)
      suspectSegments.push(s)
    })
    for (const [key, e] of edges) {
      const twin = edges.get((key % vertexCount) * vertexCount + Math.floor(key / vertexCount))
      if (twin !== undefined) neighbour[e] = Math.floor(twin / 3)
    }
    for (let t = 0; t < triangleCount; t++) suspects.push(t)
  }

  const inCircle = (t: number, x: number, y: number): boolean => {
    const a = 2 * vertex[3 * t]
    const b = 2 * vertex[3 * t + 1]
    const c = 2 * vertex[3 * t + 2]
    return incircle(point[a], point[a + 1], point[b], point[b + 1], point[c], point[c + 1], x, y) > 0
  }
  // robust-predicates takes y as pointing down: negative means left of a-b for us
  const leftOf = (a: number, b: number, x: number, y: number): boolean =>
    orient2d(point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1], x, y) < 0

  /** Collects the triangles whose circumcircle holds (x, y), from triangle `first` on, and the rim around them. */
  function openCavity(first: number, x: number, y: number, ownSegment: number): boolean {
    stamp++
    cavity.length = 0
    cavity.push(first)
    mark[first] = stamp
    for (let i = 0; i < cavity.length; i++) {
      for (let k = 0; k < 3; k++) {
        const next = neighbour[3 * cavity[i] + k]
        if (next < 0 || mark[next] === stamp || !inCircle(next, x, y)) continue
        mark[next] = stamp
        cavity.push(next)
      }
    }
    // every rim edge must see the new vertex; a triangle that hides one stays out
    for (;;) {
      rim.length = 0
      let hidden = -1
      for (const t of cavity) {
        if (mark[t] !== stamp) continue
        for (let k = 0; k < 3; k++) {
          const outside = neighbour[3 * t + k]
          if (outside >= 0 && mark[outside] === stamp) continue
          if (outside === -1 - ownSegment && ownSegment >= 0) continue
          const a = vertex[3 * t + k]
          const b = vertex[3 * t + ((k + 1) % 3)]
          if (!leftOf(a, b, x, y)) hidden = t
          rim.push(a, b, outside, t)
        }
      }
      if (hidden < 0) return true
      if (hidden === first) return false
      mark[hidden] = 0
    }
  }

  /** Replaces the cavity by a fan around the new vertex; half-segments (or -1) close the fan at a halved segment. */
  function closeCavity(x: number, y: number, halves: readonly [number, number] | null): void {
    if (2 * vertexCount + 2 > point.length) {
      point = grown(point)
      fanAt = grown(fanAt)
    }
    const m = vertexCount++
    point[2 * m] = x
    point[2 * m + 1] = y
    const slots = cavity.filter((t) => mark[t] === stamp)
    const fan: number[] = []
    for (let i = 0; i < rim.length; i += 4) {
      let t = slots.pop()
      if (t === undefined) {
        t = triangleCount++
        if (3 * triangleCount > vertex.length) {
          vertex = grown(vertex)
          neighbour = grown(neighbour)
          mark = grown(mark)
        }
      }
      const [a, b, outside, inside] = [rim[i], rim[i + 1], rim[i + 2], rim[i + 3]]
      vertex[3 * t] = m
      vertex[3 * t + 1] = a
      vertex[3 * t + 2] = b
      neighbour[3 * t + 1] = outside
      fanAt[a] = t
      fan.push(t, outside, inside, a, b)
    }
    // outer links: the neighbour's edge that faces the rim edge a-b runs from b to a
    for (let i = 0; i < fan.length; i += 5) {
      const [t, outside, , a, b] = [fan[i], fan[i + 1], fan[i + 2], fan[i + 3], fan[i + 4]]
      if (outside < 0) beside[-1 - outside] = t
      else {
        for (let k = 0; k < 3; k++) {
          if (vertex[3 * outside + k] === b && vertex[3 * outside + ((k + 1) % 3)] === a) neighbour[3 * outside + k] = t
        }
      }
    }
    // inner links: edge b-m of one triangle is edge m-a of the next
    for (let i = 0; i < fan.length; i += 5) {
      const t = fan[i]
      const b = fan[i + 4]
      if (halves && b === segments[halves[0]].a) {
        neighbour[3 * t + 2] = -1 - halves[0]
        beside[halves[0]] = t
      } else {
        const next = fanAt[b]
        neighbour[3 * t + 2] = next
        neighbour[3 * next] = t
      }
      if (halves && fan[i + 3] === segments[halves[1]].b) {
        neighbour[3 * t] = -1 - halves[1]
        beside[halves[1]] = t
      }
      suspects.push(t)
      if (fan[i + 1] < 0) suspectSegments.push(-1 - fan[i + 1])
    }
    if (halves) suspectSegments.push(...halves)
  }

  function halveSegment(s: number): void {
    const segment = segments[s]
    const [x, y] = middleOf(plate, point, segment)
    if (!openCavity(beside[s], x, y, s)) throw new Error('a boundary segment could not be halved')
    const [left, right] = halve(segment, vertexCount)
    segments[s] = left
    segments.push(right)
    beside.push(-1)
    closeCavity(x, y, [s, segments.length - 1])
  }

  /** True when the triangle at segment s sees it under an obtuse angle. */
  function encroached(s: number): boolean {
    const t = beside[s]
    const { a, b } = segments[s]
    for (let k = 0; k < 3; k++) {
      const c = vertex[3 * t + k]
      if (c !== a && c !== b) return facesObtusely(s, point[2 * c], point[2 * c + 1])
    }
    return false
  }

  function facesObtusely(s: number, x: number, y: number): boolean {
    const { a, b } = segments[s]
    return (point[2 * a] - x) * (point[2 * b] - x) + (point[2 * a + 1] - y) * (point[2 * b + 1] - y) < 0
  }

  function halveEncroached(): void {
    while (suspectSegments.length > 0) {
      const s = suspectSegments.pop()!
      if (encroached(s)) halveSegment(s)
    }
  }

  /** Puts in the circumcentre of a bad triangle, or halves the segments that stand in its way. */
  function improve(t: number): void {
    const i = 2 * vertex[3 * t]
    const j = 2 * vertex[3 * t + 1]
    const k = 2 * vertex[3 * t + 2]
    const bx = point[j] - point[i]
    const by = point[j + 1] - point[i + 1]
    const cx = point[k] - point[i]
    const cy = point[k + 1] - point[i + 1]
    const b2 = bx * bx + by * by
    const c2 = cx * cx + cy * cy
    const a2 = (cx - bx) ** 2 + (cy - by) ** 2
    const twice = 2 * (bx * cy - by * cx)
    const ux = (cy * b2 - by * c2) / twice
    const uy = (bx * c2 - cx * b2) / twice
    const radius2 = ux * ux + uy * uy
    const flat = radius2 > FLATNESS * FLATNESS * Math.min(a2, b2, c2)
    const x = point[i] + ux
    const y = point[i + 1] + uy
    if (!flat) {
      const wanted = LARGE * size(point[i] + (bx + cx) / 3, point[i + 1] + (by + cy) / 3)
      if (radius2 <= wanted * wanted) return
    }
    // walk towards the circumcentre; a segment on the way stands in the way
    let at = t
    for (;;) {
      let exit = -1
      for (let side = 0; side < 3 && exit < 0; side++) {
        const a = vertex[3 * at + side]
        const b = vertex[3 * at + ((side + 1) % 3)]
        if (orient2d(point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1], x, y) > 0) exit = side
      }
      if (exit < 0) break
      const next = neighbour[3 * at + exit]
      if (next < 0) {
        suspects.push(t)
        halveSegment(-1 - next)
        return
      }
      at = next
    }
    if (!openCavity(at, x, y, -1)) return
    const inTheWay: number[] = []
    for (let r = 2; r < rim.length; r += 4) {
      if (rim[r] < 0 && facesObtusely(-1 - rim[r], x, y)) inTheWay.push(-1 - rim[r])
    }
    if (inTheWay.length === 0) {
      closeCavity(x, y, null)
      return
    }
    suspects.push(t)
    for (const s of inTheWay) if (facesObtusely(s, x, y)) halveSegment(s)
  }

  halveEncroached()
  while (suspects.length > 0) {
    const round = suspects
    suspects = []
    for (const t of round) {
      improve(t)
      halveEncroached()
      if (vertexCount > MOST_VERTICES) throw new Error('the mesh refinement does not end')
    }
  }
  return { point: point.slice(0, 2 * vertexCount), triangle: vertex.slice(0, 3 * triangleCount), segments }
}

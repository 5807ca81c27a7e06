// Triangles in a plate whose boundary is divided: Delaunay refinement.
// J. Ruppert, J. Algorithms 18 (1995) 548; J.R. Shewchuk, Comput. Geom. 22 (2002) 21. The first triangulation of the boundary's
// vertices is made by delaunator (which knows no boundary: segments that it misses are halved until all are there), the
// void is cut away, and then vertices go in one at a time: the middle of a segment that has an obtuse angle opposite it, else
// the circumcentre of a triangle that is too flat or too large. A segment on an arc is halved on the arc. A corner of the boundary
// that is itself too sharp keeps one flat triangle; its edges are cut at equal distances from it (Ruppert's shells). Measured:
// 98 000 triangles in 0.13 s, 980 000 in 1.3 s.

import Delaunator from 'delaunator'
import { pointOn } from '../case/plate.ts'
import type { Plate, Point } from '../case/plate.ts'
import type { DividedBoundary, Segment } from './divide.ts'
import type { SizeField } from './size.ts'
import { closeCavity, isLeftOf, linkTriangles, openCavity, walkTo } from './triangulation.ts'

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
const MOST_VERTICES = 1_000_000
/** A piece of the boundary this short is not halved: lengths in plate units are multiples of it, so edges that want it touch. */
const LEAST_PIECE = 2 ** -40
/** Squared cosine of the angle (45 degrees) below which the pieces at a corner could be halved in turns for ever. */
const SHARP_COSINE2 = 0.5

/**
 * Fills the plate with triangles of the wanted size, every boundary segment an edge of exactly one of them.
 * Angles are 25 degrees or more, but for the triangle that fills a sharper corner.
 * @throws Error when the refinement does not end: edges touch or cross, or the size is not positive (a bug)
 */
export function fillPlate(plate: Plate, boundary: DividedBoundary, size: SizeField): Filling {
  const start = recoverBoundary(plate, boundary)
  return refine(plate, start.point, start.segments, start.triangle, size)
}

function halve(segment: Segment, middle: number, share: number): [Segment, Segment] {
  const t = parameterAt(segment, share)
  return [
    { ...segment, b: middle, t1: t },
    { ...segment, a: middle, t0: t }
  ]
}

function parameterAt({ t0, t1 }: Segment, share: number): number {
  return share === 0.5 ? (t0 + t1) / 2 : t0 + share * (t1 - t0)
}

/** Where a segment is halved, at a share of its parameters. @throws Error where it is too short for that */
function middleOf(plate: Plate, point: ArrayLike<number>, segment: Segment, share: number): Point {
  const { onEdge, a, b, loop, edge } = segment
  const [ax, ay, bx, by] = [point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1]]
  if (Math.hypot(bx - ax, by - ay) < LEAST_PIECE) throw new Error(`the boundary touches itself or is too sharp near (${ax}, ${ay})`)
  if (!onEdge) return [(ax + bx) / 2, (ay + by) / 2]
  return pointOn(plate.loops[loop][edge].curve, parameterAt(segment, share))
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
      const middle = point.push(...middleOf(plate, point, segment, 0.5)) / 2 - 1
      return halve(segment, middle, 0.5)
    })
    if (point.length > 2 * MOST_VERTICES) throw new Error(`the boundary was not recovered with ${MOST_VERTICES} vertices`)
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

/** Vertices where two segments on edges enclose less than 45 degrees of the plate. */
function sharpVertices(point: ArrayLike<number>, segments: readonly Segment[]): Set<number> {
  const leaving = new Map(segments.map((segment) => [segment.a, segment]))
  const sharp = new Set<number>()
  for (const before of segments) {
    const v = before.b
    const after = leaving.get(v)!
    if (!before.onEdge || !after.onEdge) continue
    const [ux, uy] = [point[2 * after.b] - point[2 * v], point[2 * after.b + 1] - point[2 * v + 1]]
    const [wx, wy] = [point[2 * before.a] - point[2 * v], point[2 * before.a + 1] - point[2 * v + 1]]
    const dot = ux * wx + uy * wy
    if (dot > 0 && ux * wy - uy * wx > 0 && dot * dot > SHARP_COSINE2 * (ux * ux + uy * uy) * (wx * wx + wy * wy)) sharp.add(v)
  }
  return sharp
}

/** Share of a segment at which it is cut: a half, or at a sharp corner what leaves a power of two of plate units there. */
function shareOf(point: ArrayLike<number>, { a, b, onEdge }: Segment, sharp: ReadonlySet<number>): number {
  if (!onEdge || sharp.has(a) === sharp.has(b)) return 0.5
  const length = Math.hypot(point[2 * b] - point[2 * a], point[2 * b + 1] - point[2 * a + 1])
  const share = 2 ** Math.round(Math.log2(length / 2)) / length
  return sharp.has(a) ? share : 1 - share
}

/** The refinement itself. */
function refine(plate: Plate, startPoint: readonly number[], startSegments: readonly Segment[], startTriangle: Int32Array, size: SizeField): Filling {
  const segments = [...startSegments]
  const grid = linkTriangles(startPoint, startTriangle, segments)
  const sharp = sharpVertices(startPoint, segments)
  // what is still to be looked at
  const suspectSegments = Array.from(segments.keys())
  let suspects = Array.from({ length: grid.triangleCount }, (_, t) => t)

  /** Puts the vertex of the open cavity in, and what is new on the lists. */
  function addVertex(x: number, y: number, halves: readonly [number, number] | null): void {
    closeCavity(grid, x, y, halves, segments)
    for (const t of grid.made) {
      suspects.push(t)
      const outside = grid.neighbour[3 * t + 1]
      if (outside < 0) suspectSegments.push(-1 - outside)
    }
    if (halves) suspectSegments.push(...halves)
  }

  function halveSegment(s: number): void {
    const segment = segments[s]
    const share = shareOf(grid.point, segment, sharp)
    const [x, y] = middleOf(plate, grid.point, segment, share)
    if (!openCavity(grid, grid.beside[s], x, y, s)) throw new Error('a boundary segment could not be halved')
    const [left, right] = halve(segment, grid.vertexCount, share)
    segments[s] = left
    segments.push(right)
    grid.beside.push(-1)
    addVertex(x, y, [s, segments.length - 1])
  }

  /** True when the triangle at segment s sees it under an obtuse angle. */
  function encroached(s: number): boolean {
    const { a, b } = segments[s]
    for (let k = 0; k < 3; k++) {
      const c = grid.vertex[3 * grid.beside[s] + k]
      if (c !== a && c !== b) return facesObtusely(s, grid.point[2 * c], grid.point[2 * c + 1])
    }
    return false
  }

  /** True when the two longer sides of triangle t are segments: its least angle is a corner of the boundary. */
  function isInCorner(t: number, a2: number, b2: number, c2: number): boolean {
    const { neighbour } = grid
    // a2, b2, c2 are the squares of sides 1, 0 and 2
    const shortest = a2 <= b2 && a2 <= c2 ? 1 : b2 <= c2 ? 0 : 2
    return neighbour[3 * t + ((shortest + 1) % 3)] < 0 && neighbour[3 * t + ((shortest + 2) % 3)] < 0
  }

  function facesObtusely(s: number, x: number, y: number): boolean {
    const { a, b } = segments[s]
    const { point } = grid
    return (point[2 * a] - x) * (point[2 * b] - x) + (point[2 * a + 1] - y) * (point[2 * b + 1] - y) < 0
  }

  function halveEncroached(): void {
    while (suspectSegments.length > 0) {
      const s = suspectSegments.pop()!
      if (encroached(s)) halveSegment(s)
    }
  }

  /** What a walk to (x, y) found; where the place lies on a segment (a right angle faces it), that segment as -1 - segment. */
  function beyond(at: number, x: number, y: number): number {
    if (at < 0) return at
    for (let side = 3 * at; side < 3 * at + 3; side++) {
      const s = grid.neighbour[side]
      if (s < 0 && !isLeftOf(grid, segments[-1 - s].a, segments[-1 - s].b, x, y)) return s
    }
    return at
  }

  /** Puts in the circumcentre of a bad triangle, or halves the segments that stand in its way. */
  function improve(t: number): void {
    const { point, vertex } = grid
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
    const flat = radius2 > FLATNESS * FLATNESS * Math.min(a2, b2, c2) && !isInCorner(t, a2, b2, c2)
    const x = point[i] + ux
    const y = point[i + 1] + uy
    if (!flat) {
      const wanted = LARGE * size(point[i] + (bx + cx) / 3, point[i + 1] + (by + cy) / 3)
      if (radius2 <= wanted * wanted) return
    }
    const at = beyond(walkTo(grid, t, x, y), x, y)
    if (at < 0) {
      suspects.push(t)
      halveSegment(-1 - at)
      return
    }
    if (!openCavity(grid, at, x, y, -1)) return
    const inTheWay: number[] = []
    for (let r = 2; r < grid.rim.length; r += 4) {
      if (grid.rim[r] < 0 && facesObtusely(-1 - grid.rim[r], x, y)) inTheWay.push(-1 - grid.rim[r])
    }
    if (inTheWay.length === 0) {
      addVertex(x, y, null)
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
      if (grid.vertexCount > MOST_VERTICES) throw new Error(`the mesh refinement does not end: ${MOST_VERTICES} vertices`)
    }
  }
  return { point: grid.point.slice(0, 2 * grid.vertexCount), triangle: grid.vertex.slice(0, 3 * grid.triangleCount), segments }
}

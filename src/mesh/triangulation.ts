// A triangulation that grows by one vertex at a time: triangles with their neighbours, and the segments that bound them. A new vertex
// takes away the triangles whose circumcircles hold it (the cavity) and joins itself to the rim around them (A. Bowyer, Comput. J.
// 24 (1981) 162; D.F. Watson, ibid. 167), so the triangulation stays Delaunay. Cost: about constant a vertex.

import { incircle, orient2d } from 'robust-predicates'
import type { Segment } from './divide.ts'

/** Grows in place; arrays are replaced by longer ones when they are full, so they must not be kept. */
export interface Triangulation {
  /** (x, y) a vertex; the first `vertexCount` are in use. */
  point: Float64Array
  vertexCount: number
  /** Vertex k of triangle t at 3 t + k, counter-clockwise; the first `triangleCount` are in use. */
  vertex: Int32Array
  /** Across the side from vertex k to k + 1 of triangle t lies neighbour[3 t + k], or -1 - segment. */
  neighbour: Int32Array
  triangleCount: number
  /** The triangle that each segment bounds. */
  readonly beside: number[]
  /** Of the cavity that is open: its triangles, those marked with `stamp` being in it; four numbers a side of its rim: from, to, what
   * lies outside, the triangle inside. */
  readonly cavity: number[]
  readonly rim: number[]
  mark: Int32Array
  stamp: number
  /** Triangles that the last vertex made. */
  readonly made: number[]
  /** The made triangle whose rim side starts at a vertex. */
  madeAt: Int32Array
}

/**
 * The triangulation of some triangles, linked to each other and to the segments, each the side of exactly one of them.
 * @param point (x, y) a vertex @param triangle three vertices each, counter-clockwise
 */
export function linkTriangles(point: readonly number[], triangle: Int32Array, segments: readonly Segment[]): Triangulation {
  const vertexCount = point.length / 2
  const triangleCount = triangle.length / 3
  const room = Math.max(64, 4 * vertexCount)
  const grid: Triangulation = {
    point: new Float64Array(2 * room),
    vertexCount,
    vertex: new Int32Array(6 * room),
    neighbour: new Int32Array(6 * room).fill(-1),
    triangleCount,
    beside: segments.map(() => -1),
    cavity: [],
    rim: [],
    mark: new Int32Array(2 * room),
    stamp: 0,
    made: [],
    madeAt: new Int32Array(room)
  }
  grid.point.set(point)
  grid.vertex.set(triangle)
  const sides = new Map<number, number>()
  for (let e = 0; e < triangle.length; e++) sides.set(triangle[e] * vertexCount + triangle[e % 3 === 2 ? e - 2 : e + 1], e)
  for (const [key, e] of sides) {
    const twin = sides.get((key % vertexCount) * vertexCount + Math.floor(key / vertexCount))
    if (twin !== undefined) grid.neighbour[e] = Math.floor(twin / 3)
  }
  segments.forEach(({ a, b }, s) => {
    const e = sides.get(a * vertexCount + b)!
    grid.neighbour[e] = -1 - s
    grid.beside[s] = Math.floor(e / 3)
  })
  return grid
}

function isInCircle({ point, vertex }: Triangulation, t: number, x: number, y: number): boolean {
  const a = 2 * vertex[3 * t]
  const b = 2 * vertex[3 * t + 1]
  const c = 2 * vertex[3 * t + 2]
  return incircle(point[a], point[a + 1], point[b], point[b + 1], point[c], point[c + 1], x, y) > 0
}

/** True when (x, y) lies strictly left of the line from vertex a to vertex b. */
export function isLeftOf({ point }: Triangulation, a: number, b: number, x: number, y: number): boolean {
  // robust-predicates takes y as pointing down: negative means left for us
  return orient2d(point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1], x, y) < 0
}

/**
 * The triangle that holds (x, y), on a walk from triangle `from`; or -1 - segment for a segment that stands in the way.
 * @throws Error when the walk goes in circles, which it cannot in a Delaunay triangulation
 */
export function walkTo(grid: Triangulation, from: number, x: number, y: number): number {
  const { point, vertex, neighbour } = grid
  let at = from
  for (let steps = 0; steps <= grid.triangleCount; steps++) {
    let exit = -1
    for (let side = 0; side < 3 && exit < 0; side++) {
      const a = vertex[3 * at + side]
      const b = vertex[3 * at + (side === 2 ? 0 : side + 1)]
      if (orient2d(point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1], x, y) > 0) exit = side
    }
    if (exit < 0) return at
    at = neighbour[3 * at + exit]
    if (at < 0) return at
  }
  throw new Error(`no triangle holds (${x}, ${y})`)
}

/**
 * Opens the cavity of a new vertex at (x, y), from a triangle `first` that holds it; `ownSegment` is the segment that the vertex
 * halves, -1 for none. False where `first` itself hides the vertex: then there is no cavity.
 */
export function openCavity(grid: Triangulation, first: number, x: number, y: number, ownSegment: number): boolean {
  const { vertex, neighbour, cavity, rim, mark } = grid
  const stamp = ++grid.stamp
  cavity.length = 0
  cavity.push(first)
  mark[first] = stamp
  for (let i = 0; i < cavity.length; i++) {
    for (let k = 0; k < 3; k++) {
      const next = neighbour[3 * cavity[i] + k]
      if (next < 0 || mark[next] === stamp || !isInCircle(grid, next, x, y)) continue
      mark[next] = stamp
      cavity.push(next)
    }
  }
  // every rim side must see the new vertex; a triangle that hides one stays out
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
        const b = vertex[3 * t + (k === 2 ? 0 : k + 1)]
        if (!isLeftOf(grid, a, b, x, y)) hidden = t
        rim.push(a, b, outside, t)
      }
    }
    if (hidden < 0) return true
    if (hidden === first) return false
    mark[hidden] = 0
  }
}

/**
 * Closes the open cavity with a fan of triangles around a new vertex at (x, y), which is returned; `made` lists them. Where the vertex
 * halves a segment, `halves` are the numbers of its two parts, which are already in `segments`.
 */
export function closeCavity(grid: Triangulation, x: number, y: number, halves: readonly [number, number] | null, segments: readonly Segment[]): number {
  makeRoom(grid)
  const { cavity, rim, mark, stamp, made, beside } = grid
  const m = grid.vertexCount++
  grid.point[2 * m] = x
  grid.point[2 * m + 1] = y
  const free = cavity.filter((t) => mark[t] === stamp)
  made.length = 0
  const { vertex, neighbour, madeAt } = grid
  for (let i = 0; i < rim.length; i += 4) {
    const t = free.pop() ?? grid.triangleCount++
    vertex[3 * t] = m
    vertex[3 * t + 1] = rim[i]
    vertex[3 * t + 2] = rim[i + 1]
    neighbour[3 * t + 1] = rim[i + 2]
    madeAt[rim[i]] = t
    made.push(t)
  }
  // to what lies outside: the neighbour's side along the rim side a-b runs from b to a
  for (const t of made) {
    const [a, b, outside] = [vertex[3 * t + 1], vertex[3 * t + 2], neighbour[3 * t + 1]]
    if (outside < 0) beside[-1 - outside] = t
    else {
      for (let k = 0; k < 3; k++) {
        if (vertex[3 * outside + k] === b && vertex[3 * outside + (k === 2 ? 0 : k + 1)] === a) neighbour[3 * outside + k] = t
      }
    }
  }
  // to each other: side b-m of one triangle is side m-a of the next; the halves of a segment close the fan at its ends
  for (const t of made) {
    const [a, b] = [vertex[3 * t + 1], vertex[3 * t + 2]]
    if (halves && b === segments[halves[0]].a) {
      neighbour[3 * t + 2] = -1 - halves[0]
      beside[halves[0]] = t
    } else {
      const next = madeAt[b]
      neighbour[3 * t + 2] = next
      neighbour[3 * next] = t
    }
    if (halves && a === segments[halves[1]].b) {
      neighbour[3 * t] = -1 - halves[1]
      beside[halves[1]] = t
    }
  }
  return m
}

/** Room for one more vertex and the triangles around it. */
function makeRoom(grid: Triangulation): void {
  if (2 * grid.vertexCount + 2 > grid.point.length) {
    grid.point = longer(grid.point)
    grid.madeAt = longer(grid.madeAt)
  }
  // a fan has at most as many triangles as the rim has sides
  if (3 * (grid.triangleCount + grid.rim.length / 4) > grid.vertex.length) {
    grid.vertex = longer(grid.vertex)
    grid.neighbour = longer(grid.neighbour)
    grid.mark = longer(grid.mark)
  }
}

/** An array of twice the length with the same beginning. */
function longer<T extends Int32Array | Float64Array>(array: T): T {
  const twice = new (array.constructor as new (length: number) => T)(2 * array.length)
  twice.set(array)
  return twice
}

// Smoothing of a filling: inner vertices move toward the middle of their neighbours where that makes the worst triangle around them
// better (D.A. Field, Commun. Appl. Numer. Methods 4 (1988) 709, with the step refused that makes an angle worse). What triangulation
// and sizes are does not change. Cost: a few passes over the vertices.

import type { Plate } from '../case/plate.ts'
import type { Filling } from './fill.ts'

const PASSES = 3
/** Shares of the way to the neighbours' middle that are tried. */
const STEPS = [1, 0.5]

/** The filling with its inner vertices moved; those on segments stay, and those of a triangle on an arc, which its bulge might reach. */
export function smoothFilling(plate: Plate, filling: Filling): Filling {
  const { triangle, segments } = filling
  const point = filling.point.slice()
  const vertices = point.length / 2
  const { start, corner } = stars(triangle, vertices)
  const isFixed = new Uint8Array(vertices)
  for (const { a, b } of segments) isFixed[a] = isFixed[b] = 1
  for (const { onEdge, a, b, loop, edge } of segments) {
    if (onEdge && plate.loops[loop][edge].curve.kind === 'arc') fixOpposite(a, b, triangle, start, corner, isFixed)
  }
  for (let pass = 0; pass < PASSES; pass++) {
    for (let v = 0; v < vertices; v++) {
      if (isFixed[v] || start[v + 1] === start[v]) continue
      moveVertex(v, point, triangle, start, corner)
    }
  }
  return { point, triangle, segments }
}

/** For each vertex the corners (indices into `triangle`) where it stands: corner[start[v]] .. corner[start[v + 1] - 1]. */
function stars(triangle: Int32Array, vertices: number): { start: Int32Array; corner: Int32Array } {
  const start = new Int32Array(vertices + 1)
  for (const v of triangle) start[v + 1]++
  for (let v = 0; v < vertices; v++) start[v + 1] += start[v]
  const corner = new Int32Array(triangle.length)
  const next = start.slice()
  triangle.forEach((v, i) => {
    corner[next[v]++] = i
  })
  return { start, corner }
}

const nextCorner = (i: number): number => (i % 3 === 2 ? i - 2 : i + 1)

/** Marks the vertex that faces the side a-b, in place. */
function fixOpposite(a: number, b: number, triangle: Int32Array, start: Int32Array, corner: Int32Array, isFixed: Uint8Array): void {
  for (let c = start[a]; c < start[a + 1]; c++) {
    const i = nextCorner(corner[c])
    if (triangle[i] === b) isFixed[triangle[nextCorner(i)]] = 1
  }
}

/** Moves a vertex, in place, to the first place tried where the worst triangle of its star is better than it was. */
function moveVertex(v: number, point: Float64Array, triangle: Int32Array, start: Int32Array, corner: Int32Array): void {
  const [x, y] = [point[2 * v], point[2 * v + 1]]
  let [mx, my] = [0, 0]
  for (let c = start[v]; c < start[v + 1]; c++) {
    const a = triangle[nextCorner(corner[c])]
    mx += point[2 * a]
    my += point[2 * a + 1]
  }
  const degree = start[v + 1] - start[v]
  const before = worstAround(v, point, triangle, start, corner)
  for (const step of STEPS) {
    point[2 * v] = x + step * (mx / degree - x)
    point[2 * v + 1] = y + step * (my / degree - y)
    if (worstAround(v, point, triangle, start, corner) > before) return
  }
  point[2 * v] = x
  point[2 * v + 1] = y
}

/** Least sine of an angle in the triangles around a vertex; below 0 where one is turned over. */
function worstAround(v: number, point: Float64Array, triangle: Int32Array, start: Int32Array, corner: Int32Array): number {
  let worst = 1
  const [x, y] = [point[2 * v], point[2 * v + 1]]
  for (let c = start[v]; c < start[v + 1]; c++) {
    const i = nextCorner(corner[c])
    const a = triangle[i]
    const b = triangle[nextCorner(i)]
    const ax = point[2 * a] - x
    const ay = point[2 * a + 1] - y
    const bx = point[2 * b] - x
    const by = point[2 * b + 1] - y
    const twice = ax * by - ay * bx
    const [p, q, r] = [ax * ax + ay * ay, bx * bx + by * by, (bx - ax) ** 2 + (by - ay) ** 2]
    // the least angle lies between the two longest sides
    worst = Math.min(worst, twice / Math.sqrt(Math.max(p * q, q * r, r * p)))
  }
  return worst
}

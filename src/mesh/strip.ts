// From planned strips and triangles to nodes and elements: the rails get their layers, the columns their quads, the tapers their
// triangles, and the edges under them their pieces of the boundary.

import { pointOn, type Plate } from '../case/plate.ts'
import type { Collar } from './collar.ts'
import type { DividedBoundary, Segment } from './divide.ts'
import type { Filling } from './fill.ts'
import { LAYERS } from './rail.ts'

/** All nodes and elements of a plate and the pieces of its boundary. */
export interface Elements {
  /** (x, y) a node. */
  readonly point: Float64Array
  /** Three nodes each, counter-clockwise. */
  readonly triangle: Int32Array
  /** Four nodes each, counter-clockwise. */
  readonly quad: Int32Array
  readonly segments: readonly Segment[]
}

/** The front of a collar as a boundary for the filler: only the vertices on it, `vertex` giving their numbers in the collar. */
export function frontOf({ point, front }: Collar): { boundary: DividedBoundary; vertex: number[] } {
  const numberOf = new Map<number, number>()
  const vertex: number[] = []
  const number = (old: number): number => {
    let found = numberOf.get(old)
    if (found === undefined) {
      found = vertex.push(old) - 1
      numberOf.set(old, found)
    }
    return found
  }
  const segments = front.map((segment) => ({ ...segment, a: number(segment.a), b: number(segment.b) }))
  return { boundary: { point: vertex.flatMap((v) => [point[2 * v], point[2 * v + 1]]), segments }, vertex }
}

/** Adds the elements between front and edge to the triangles that fill the front; `vertex` as of `frontOf`. */
export function layStrips(plate: Plate, collar: Collar, vertex: readonly number[], filling: Filling): Elements {
  const point = Array.from(filling.point)
  const triangle = Array.from(filling.triangle)
  const number = new Int32Array(collar.point.length / 2).fill(-1)
  vertex.forEach((old, i) => {
    number[old] = i
  })
  const addPoint = (x: number, y: number) => point.push(x, y) / 2 - 1
  const nodeOf = (old: number): number => {
    if (number[old] < 0) number[old] = addPoint(collar.point[2 * old], collar.point[2 * old + 1])
    return number[old]
  }
  const quad = collar.quad.map(nodeOf)
  const settled = collar.covered.map((piece) => ({ ...piece, a: nodeOf(piece.a), b: nodeOf(piece.b) }))
  const segments = [...filling.segments.filter(({ onEdge }) => onEdge), ...settled]

  const piecesOf = piecesByPlace(filling.segments)
  for (const taper of collar.tapers) {
    for (const { a, b } of piecesOf(taper)) triangle.push(b, a, nodeOf(taper.apex))
  }
  for (const column of collar.columns) {
    const { loop, edge } = column
    const { curve } = plate.loops[loop][edge]
    const pieces = piecesOf(column)
    let left = column.left.map(nodeOf)
    pieces.forEach((piece, i) => {
      const last = i === pieces.length - 1
      const right = last ? column.right.map(nodeOf) : standRail(addPoint(...pointOn(curve, piece.t1)), piece.b, column.left.length)
      for (let k = 1; k < left.length; k++) quad.push(left[k - 1], right[k - 1], right[k], left[k])
      segments.push({ ...piece, onEdge: true, a: left[0], b: right[0] })
      left = right
    })
  }

  /** A new rail between foot and top, layered like the others. */
  function standRail(foot: number, top: number, nodes: number): number[] {
    const rail = [foot]
    for (let k = 0; k < nodes - 2; k++) {
      const share = LAYERS[k] / LAYERS[nodes - 2]
      rail.push(addPoint(point[2 * foot] + share * (point[2 * top] - point[2 * foot]), point[2 * foot + 1] + share * (point[2 * top + 1] - point[2 * foot + 1])))
    }
    rail.push(top)
    return rail
  }
  return { point: Float64Array.from(point), triangle: Int32Array.from(triangle), quad: Int32Array.from(quad), segments }
}

/** A function that gives the front's pieces above the part t0 .. t1 of an edge, in the edge's order. */
function piecesByPlace(segments: readonly Segment[]) {
  const onEdge = new Map<string, Segment[]>()
  for (const segment of segments) {
    if (segment.onEdge) continue
    const key = `${segment.loop}/${segment.edge}`
    if (!onEdge.has(key)) onEdge.set(key, [])
    onEdge.get(key)!.push(segment)
  }
  for (const list of onEdge.values()) list.sort((p, q) => p.t0 - q.t0)
  return ({ loop, edge, t0, t1 }: { loop: number; edge: number; t0: number; t1: number }): Segment[] =>
    onEdge.get(`${loop}/${edge}`)!.filter((piece) => piece.t0 >= t0 && piece.t1 <= t1)
}

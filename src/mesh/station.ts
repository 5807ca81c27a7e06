// The boundary as a collar's plan sees it: rings of stations, one ring a loop, that may be cut once more.

import { derivativeOn, pointOn, type Plate, type Point } from '../case/plate.ts'
import type { DividedBoundary } from './divide.ts'

/** A vertex of the boundary and the piece of it that starts there. */
export interface Station {
  readonly vertex: number
  readonly edge: number
  readonly t0: number
  t1: number
  /** True while the piece is to carry quads. */
  wanted: boolean
  /** Of the rail that stands here: direction, full thickness of the strip, layers, nodes from foot to top. */
  direction: Point
  thickness: number
  level: number
  nodes: readonly number[]
  /** What the end of a strip does here: lies on the piece after (1) or before (-1) this vertex, or falls to the edge (0). */
  lies: -1 | 0 | 1
}

/** The stations of a loop, in its order; cyclic. */
export type Ring = Station[]

/** One ring a loop; pieces on arcs want quads. */
export function ringsOf(plate: Plate, { segments }: DividedBoundary): Ring[] {
  const rings: Ring[] = plate.loops.map(() => [])
  for (const { a, loop, edge, t0, t1 } of segments) {
    const wanted = plate.loops[loop][edge].curve.kind === 'arc'
    rings[loop].push({ vertex: a, edge, t0, t1, wanted, direction: [0, 0], thickness: 0, level: 0, nodes: [a], lies: 0 })
  }
  return rings
}

/** The station at i, counted around the ring. */
export const at = (ring: Ring, i: number): Station => ring[(i + ring.length) % ring.length]

/** Angle of the material at station i, degrees: 180 inside an edge and at a tangent point. */
export function materialAngle(plate: Plate, loop: number, ring: Ring, i: number): number {
  const before = at(ring, i - 1)
  const after = at(ring, i)
  if (before.edge === after.edge && after.t0 !== 0) return 180
  const [ax, ay] = derivativeOn(plate.loops[loop][before.edge].curve, before.t1)
  const [bx, by] = derivativeOn(plate.loops[loop][after.edge].curve, after.t0)
  return 180 - (Math.atan2(ax * by - ay * bx, ax * bx + ay * by) * 180) / Math.PI
}

/** Cuts piece i of a ring at a share of its parameter, in place. */
export function cut(plate: Plate, loop: number, ring: Ring, i: number, share: number, point: number[]): void {
  const station = at(ring, i)
  const t = station.t0 + share * (station.t1 - station.t0)
  const vertex = point.push(...pointOn(plate.loops[loop][station.edge].curve, t)) / 2 - 1
  ring.splice(ring.indexOf(station) + 1, 0, { ...station, vertex, t0: t, thickness: 0, level: 0, nodes: [vertex], lies: 0 })
  station.t1 = t
}

/** Distance between two vertices of a list of points. */
export const lengthBetween = (point: readonly number[], a: number, b: number): number =>
  Math.hypot(point[2 * b] - point[2 * a], point[2 * b + 1] - point[2 * a + 1])

// The boundary divided to the wanted size: each edge of the plate becomes a row of segments between shared vertices.

import { lengthOf, pointOn } from '../case/plate.ts'
import type { Curve, Plate, Point } from '../case/plate.ts'
import type { SizeField } from './size.ts'

/**
 * One piece of the line around what triangles have to fill: from vertex a to vertex b, what is to be filled on the left.
 * It belongs to the part t0 .. t1 of an edge's curve.
 */
export interface Segment {
  /** True where the piece itself lies on the edge; else it is straight and belongs to quads between it and the edge. */
  readonly onEdge: boolean
  readonly a: number
  readonly b: number
  readonly loop: number
  readonly edge: number
  readonly t0: number
  readonly t1: number
}

/** Vertices (x, y a vertex) and segments of the divided boundary, loop by loop, edge by edge. */
export interface DividedBoundary {
  readonly point: number[]
  readonly segments: Segment[]
}

/** A segment on an arc never turns by more than this angle (46 degrees, so that 45 fit in spite of rounding). */
const MOST_TURN = 0.803

/** Divides every edge so that its segments have about the size that the field asks for there. */
export function divideBoundary(plate: Plate, size: SizeField): DividedBoundary {
  const point: number[] = []
  const segments: Segment[] = []
  const addPoint = ([x, y]: Point) => point.push(x, y) / 2 - 1
  plate.loops.forEach((loop, l) => {
    const first = point.length / 2
    let a = addPoint(loop[0].curve.from)
    loop.forEach(({ curve }, e) => {
      const cuts = divideCurve(curve, size)
      for (let i = 1; i < cuts.length; i++) {
        const last = e === loop.length - 1 && i === cuts.length - 1
        const b = last ? first : addPoint(pointOn(curve, cuts[i]))
        segments.push({ onEdge: true, a, b, loop: l, edge: e, t0: cuts[i - 1], t1: cuts[i] })
        a = b
      }
    })
  })
  return { point, segments }
}

/** Parameters 0 = t0 < ... < tn = 1 that give each part the same share of the integral of ds / size. */
function divideCurve(curve: Curve, size: SizeField): number[] {
  const fine = [0]
  const wanted = (t: number) => size(...pointOn(curve, t))
  const length = lengthOf(curve)
  const refine = (t0: number, t1: number, s0: number, s1: number): void => {
    if ((t1 - t0) * length > 0.5 * Math.min(s0, s1)) {
      const t = (t0 + t1) / 2
      const s = wanted(t)
      refine(t0, t, s0, s)
      refine(t, t1, s, s1)
    } else fine.push(t1)
  }
  refine(0, 1, wanted(0), wanted(1))

  const share = [0]
  for (let i = 1; i < fine.length; i++) {
    share.push(share[i - 1] + ((fine[i] - fine[i - 1]) * length) / wanted((fine[i] + fine[i - 1]) / 2))
  }
  const total = share[share.length - 1]
  const turns = curve.kind === 'arc' ? Math.ceil(Math.abs(curve.sweep) / MOST_TURN) : 1
  const count = Math.max(turns, Math.ceil(total - 0.1))
  const cuts = [0]
  for (let i = 1, j = 1; i < count; i++) {
    const target = (total * i) / count
    while (share[j] < target) j++
    cuts.push(fine[j - 1] + ((fine[j] - fine[j - 1]) * (target - share[j - 1])) / (share[j] - share[j - 1]))
  }
  cuts.push(1)
  return cuts
}

// A mesh of quads only: every triangle becomes three quads around its centre, every quad four. All sides are halved, so the
// pieces fit together; a side on an edge of the plate is halved on its curve. The new mesh is smoothed.

import { pointOn, type Plate } from '../case/plate.ts'
import type { Segment } from './divide.ts'
import { smoothNodes } from './smooth.ts'
import type { Elements } from './strip.ts'

/** The same plate in quads: three a triangle, four a quad. */
export function splitIntoQuads(plate: Plate, { point: old, triangle, quad, segments }: Elements): Elements {
  const point = Array.from(old)
  const nodes = old.length / 2
  const addPoint = (x: number, y: number) => point.push(x, y) / 2 - 1
  const keyOf = (a: number, b: number) => Math.min(a, b) * nodes + Math.max(a, b)
  const middle = new Map<number, number>()
  const halves = segments.flatMap((segment): Segment[] => {
    const { a, b, loop, edge, t0, t1 } = segment
    const t = (t0 + t1) / 2
    const m = addPoint(...pointOn(plate.loops[loop][edge].curve, t))
    middle.set(keyOf(a, b), m)
    return [
      { ...segment, b: m, t1: t },
      { ...segment, a: m, t0: t }
    ]
  })
  const middleOf = (a: number, b: number): number => {
    const key = keyOf(a, b)
    const known = middle.get(key)
    if (known !== undefined) return known
    const m = addPoint((old[2 * a] + old[2 * b]) / 2, (old[2 * a + 1] + old[2 * b + 1]) / 2)
    middle.set(key, m)
    return m
  }
  const pieces: number[] = []
  const split = (corner: Int32Array): void => {
    const middles = Array.from(corner, (a, k) => middleOf(a, corner[(k + 1) % corner.length]))
    const mean = (axis: number) => middles.reduce((sum, m) => sum + point[2 * m + axis], 0) / middles.length
    const centre = addPoint(mean(0), mean(1))
    corner.forEach((a, k) => pieces.push(a, middles[k], centre, middles[(k + corner.length - 1) % corner.length]))
  }
  for (let i = 0; i < triangle.length; i += 3) split(triangle.subarray(i, i + 3))
  for (let i = 0; i < quad.length; i += 4) split(quad.subarray(i, i + 4))
  const element = Int32Array.from(pieces)
  const smooth = smoothNodes(plate, { point: Float64Array.from(point), element, corners: 4, segments: halves })
  return { point: smooth, triangle: new Int32Array(0), quad: element, segments: halves }
}

// The sides of the elements as thin lines over the field. Sides on the plate's edges are under its outline already; all others are
// straight. Lines get paler where the elements are small on the picture, so that the colours under them stay readable.

import type { Mesh } from '../../mesh/mesh.ts'
import { type Canvas, type Colour, fill } from './canvas.ts'
import { coverPolygons, type Polygon } from './coverage.ts'
import { strokeLine } from './stroke.ts'
import type { View } from './view.ts'

/** Strength of the lines: the most, the least, and the median length of a side in widths of the line at which it is at its most. */
const STRONGEST = 0.6
const PALEST = 0.2
const LONG = 30

/** Draws the sides inside the plate, in place, `width` pixels wide. */
export function drawMesh(canvas: Canvas, { point, side, sideBoundary }: Mesh, view: View, width: number, ink: Colour): void {
  const lines: Polygon[] = []
  const lengths: number[] = []
  const at = (node: number): [number, number] => [view.x0 + view.scale * point[2 * node], view.y0 - view.scale * point[2 * node + 1]]
  for (let s = 0; s < sideBoundary.length; s++) {
    if (sideBoundary[s] >= 0) continue
    const [ax, ay] = at(side[2 * s])
    const [bx, by] = at(side[2 * s + 1])
    lengths.push(Math.hypot(bx - ax, by - ay))
    lines.push(strokeLine(ax, ay, bx, by, width))
  }
  if (lines.length === 0) return
  const median = lengths.sort((a, b) => a - b)[lengths.length >> 1]
  const strength = Math.max(PALEST, STRONGEST * Math.min(1, median / (LONG * width)))
  const coverage = coverPolygons(lines)
  fill(canvas, { ...coverage, amount: coverage.amount.map((amount) => strength * amount) }, ink)
}

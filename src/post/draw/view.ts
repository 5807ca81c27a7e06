// Where the plate stands in the picture, and its outline in pixels.

import { type Curve, type Loop, type Plate, pointOn } from '../../case/plate.ts'
import type { Polygon } from './coverage.ts'

/** Plate to pixels: px = x0 + scale x, py = y0 - scale y; `scale` in pixels a plate unit. */
export interface View {
  readonly scale: number
  readonly x0: number
  readonly y0: number
}

/** A box of the picture, pixels, y down. */
export interface Box {
  readonly left: number
  readonly top: number
  readonly right: number
  readonly bottom: number
}

/** Chords leave the true arc by at most this many pixels. */
const CHORD_ERROR = 0.01

/** The largest view that shows the whole plate inside `box`, centred. */
export function viewOf(plate: Plate, box: Box): View {
  const [x0, y0, x1, y1] = extentOf(plate.loops[0])
  const scale = Math.min((box.right - box.left) / (x1 - x0), (box.bottom - box.top) / (y1 - y0))
  return {
    scale,
    x0: (box.left + box.right) / 2 - (scale * (x0 + x1)) / 2,
    y0: (box.top + box.bottom) / 2 + (scale * (y0 + y1)) / 2
  }
}

/** Every loop of the plate as a polygon in pixels, arcs in chords too short to see. */
export function outlineOf(plate: Plate, view: View): Polygon[] {
  return plate.loops.map((loop) => {
    const polygon: number[] = []
    for (const { curve } of loop) {
      const chords = chordsOf(curve, view.scale)
      for (let i = 0; i < chords; i++) {
        const [x, y] = pointOn(curve, i / chords)
        polygon.push(view.x0 + view.scale * x, view.y0 - view.scale * y)
      }
    }
    return Float64Array.from(polygon)
  })
}

/** Sagitta of a chord over the angle q is r (1 - cos(q / 2)), about r q^2 / 8. */
function chordsOf(curve: Curve, scale: number): number {
  if (curve.kind === 'line') return 1
  const radius = Math.max(curve.axes[0], curve.axes[1]) * scale
  return Math.max(2, Math.ceil(Math.abs(curve.sweep) * Math.sqrt(radius / (8 * CHORD_ERROR))))
}

/** [x0, y0, x1, y1] of a loop, plate units; arcs by points a degree apart or less, good to 4e-5 of their radius. */
function extentOf(loop: Loop): [number, number, number, number] {
  let [x0, y0, x1, y1] = [Infinity, Infinity, -Infinity, -Infinity]
  for (const { curve } of loop) {
    const count = curve.kind === 'line' ? 1 : Math.ceil(Math.abs(curve.sweep) * (180 / Math.PI))
    for (let i = 0; i < count; i++) {
      const [x, y] = pointOn(curve, i / count)
      x0 = Math.min(x0, x)
      y0 = Math.min(y0, y)
      x1 = Math.max(x1, x)
      y1 = Math.max(y1, y)
    }
  }
  return [x0, y0, x1, y1]
}

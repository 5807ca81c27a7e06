// Lines of a given width as polygons to be covered: closed rings with mitred corners, and straight pieces.
// All in pixels, y down.

import type { Polygon } from './coverage.ts'

/** Beyond this many half widths a corner's point is cut back: 2 keeps the corner of a 60 degree notch sharp. */
const MITRE_LIMIT = 2

/**
 * The band of `width` pixels along a closed polygon, as two rings that wind against each other.
 * Vertices closer together than a thousandth of a pixel are taken as one.
 */
export function strokeClosed(polygon: Polygon, width: number): Polygon[] {
  const ring = withoutRepeats(polygon)
  if (ring.length < 6) return []
  const inner = shiftSideways(ring, -width / 2)
  return [shiftSideways(ring, width / 2), reversed(inner)]
}

/** The straight line of `width` pixels from (x0, y0) to (x1, y1), square ends. */
export function strokeLine(x0: number, y0: number, x1: number, y1: number, width: number): Polygon {
  const length = Math.hypot(x1 - x0, y1 - y0)
  const nx = (-(y1 - y0) / length) * (width / 2)
  const ny = ((x1 - x0) / length) * (width / 2)
  return Float64Array.of(x0 + nx, y0 + ny, x1 + nx, y1 + ny, x1 - nx, y1 - ny, x0 - nx, y0 - ny)
}

/** A circle, flattened to within a hundredth of a pixel. */
export function circle(x: number, y: number, radius: number): Polygon {
  const count = Math.max(12, Math.ceil(Math.PI / Math.acos(1 - Math.min(0.01 / radius, 0.5))))
  const polygon = new Float64Array(2 * count)
  for (let i = 0; i < count; i++) {
    polygon[2 * i] = x + radius * Math.cos((2 * Math.PI * i) / count)
    polygon[2 * i + 1] = y + radius * Math.sin((2 * Math.PI * i) / count)
  }
  return polygon
}

function withoutRepeats(polygon: Polygon): Polygon {
  const kept: number[] = []
  for (let i = 0; i < polygon.length; i += 2) {
    const before = kept.length === 0 ? polygon.length - 2 : kept.length - 2
    const from = kept.length === 0 ? polygon : kept
    if (Math.hypot(polygon[i] - from[before], polygon[i + 1] - from[before + 1]) > 1e-3) {
      kept.push(polygon[i], polygon[i + 1])
    }
  }
  return Float64Array.from(kept)
}

/** Every vertex moved along the bisector of its two sides so that both sides move by `distance` to their right. */
function shiftSideways(ring: Polygon, distance: number): Polygon {
  const count = ring.length / 2
  const shifted = new Float64Array(ring.length)
  for (let i = 0; i < count; i++) {
    const [ax, ay] = unitNormal(ring, (i + count - 1) % count, i)
    const [bx, by] = unitNormal(ring, i, (i + 1) % count)
    // the mitre is (a + b) / (1 + a . b); its length 1 / cos(half the turn) is held below the limit
    const reach = Math.max(1 + ax * bx + ay * by, 2 / MITRE_LIMIT ** 2)
    shifted[2 * i] = ring[2 * i] + (distance * (ax + bx)) / reach
    shifted[2 * i + 1] = ring[2 * i + 1] + (distance * (ay + by)) / reach
  }
  return shifted
}

function unitNormal(ring: Polygon, from: number, to: number): [number, number] {
  const dx = ring[2 * to] - ring[2 * from]
  const dy = ring[2 * to + 1] - ring[2 * from + 1]
  const length = Math.hypot(dx, dy)
  return [-dy / length, dx / length]
}

function reversed(ring: Polygon): Polygon {
  const turned = new Float64Array(ring.length)
  for (let i = 0; i < ring.length; i += 2) {
    turned[i] = ring[ring.length - 2 - i]
    turned[i + 1] = ring[ring.length - 1 - i]
  }
  return turned
}

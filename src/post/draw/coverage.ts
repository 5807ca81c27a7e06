// How much of each pixel a set of closed polygons covers: exact area, no sampling.
// Pixel (i, j) is the square [i, i + 1] x [j, j + 1], y down. Polygons wind: a hole that runs against its outer ring
// stays empty. Cost: the box of the polygons plus the pixels that their edges cross.

/** Polygon in pixels: (x, y) a vertex, 2 numbers each, closed from the last vertex to the first. */
export type Polygon = Float64Array

/** Coverage 0 to 1 a pixel, row by row, of the box whose upper left pixel is (x, y); `width` times `height` numbers. */
export interface Coverage {
  readonly x: number
  readonly y: number
  readonly width: number
  readonly height: number
  readonly amount: Float32Array
}

/**
 * Coverage of polygons that share one winding number.
 *
 * An edge piece inside one pixel row, of signed height d and running from xa to xb (xa <= xb), adds to everything on its
 * right. Left of x = c it adds the area d g(c), with g(c) = 0 for c <= xa, (c - xa)^2 / (2 (xb - xa)) for c within, and
 * c - (xa + xb) / 2 for c >= xb. Pixel k thus gains d (g(k + 1) - g(k)), so the row's running sum needs the second
 * difference of g, which is zero but for the few pixels that the piece touches.
 */
export function coverPolygons(polygons: readonly Polygon[]): Coverage {
  let left = Infinity
  let top = Infinity
  let right = -Infinity
  let bottom = -Infinity
  for (const polygon of polygons) {
    for (let i = 0; i < polygon.length; i += 2) {
      left = Math.min(left, polygon[i])
      right = Math.max(right, polygon[i])
      top = Math.min(top, polygon[i + 1])
      bottom = Math.max(bottom, polygon[i + 1])
    }
  }
  if (!(right > left && bottom > top)) return { x: 0, y: 0, width: 0, height: 0, amount: new Float32Array(0) }

  const x = Math.floor(left)
  const y = Math.floor(top)
  const width = Math.floor(right) - x + 1
  const height = Math.ceil(bottom) - y
  // one more column takes the differences that fall right of the box
  const pitch = width + 1
  const change = new Float32Array(pitch * height)
  for (const polygon of polygons) {
    let px = polygon[polygon.length - 2] - x
    let py = polygon[polygon.length - 1] - y
    for (let i = 0; i < polygon.length; i += 2) {
      const qx = polygon[i] - x
      const qy = polygon[i + 1] - y
      addEdge(change, pitch, px, py, qx, qy)
      px = qx
      py = qy
    }
  }

  const amount = new Float32Array(width * height)
  for (let row = 0; row < height; row++) {
    let winding = 0
    for (let column = 0; column < width; column++) {
      winding += change[row * pitch + column]
      const covered = Math.abs(winding)
      // below a ten-thousandth is rounding of the running sum, and no 8-bit colour shows it
      amount[row * width + column] = covered < 1e-4 ? 0 : covered > 1 ? 1 : covered
    }
  }
  return { x, y, width, height, amount }
}

/** Adds one edge to `change` in place: the change of coverage from each pixel to its right neighbour, `pitch` a row. */
function addEdge(change: Float32Array, pitch: number, px: number, py: number, qx: number, qy: number): void {
  if (py === qy) return
  const sign = py < qy ? 1 : -1
  const [x0, y0, x1, y1] = py < qy ? [px, py, qx, qy] : [qx, qy, px, py]
  const slope = (x1 - x0) / (y1 - y0)
  for (let row = Math.floor(y0); row < y1; row++) {
    const from = Math.max(row, y0)
    const to = Math.min(row + 1, y1)
    const a = x0 + (from - y0) * slope
    const b = x0 + (to - y0) * slope
    const xa = Math.min(a, b)
    const xb = Math.max(a, b)
    const d = sign * (to - from)
    let before = 0
    let here = 0
    const last = Math.min(Math.floor(xb) + 1, pitch - 1)
    for (let k = Math.floor(xa); k <= last; k++) {
      const after = areaLeftOf(k + 1, xa, xb)
      change[row * pitch + k] += d * (after - 2 * here + before)
      before = here
      here = after
    }
  }
}

/** g(c) of a piece of height 1 from xa to xb. */
function areaLeftOf(c: number, xa: number, xb: number): number {
  if (c <= xa) return 0
  if (c >= xb) return c - (xa + xb) / 2
  return (c - xa) ** 2 / (2 * (xb - xa))
}

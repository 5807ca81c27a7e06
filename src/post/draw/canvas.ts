// The picture while it is drawn: 8-bit sRGB pixels, and the one way to put colour on them, through a coverage.
// Half covered pixels are mixed in sRGB itself: thin dark lines and letters on paper keep their weight that way.

import type { Coverage } from './coverage.ts'

/** 0xRRGGBB, sRGB. */
export type Colour = number

/** Three bytes a pixel (red, green, blue), row by row from the top: 3 times `width` times `height`. */
export interface Canvas {
  readonly width: number
  readonly height: number
  readonly pixel: Uint8Array
}

/** A canvas of one colour. */
export function blankCanvas(width: number, height: number, paper: Colour): Canvas {
  const pixel = new Uint8Array(3 * width * height)
  for (let i = 0; i < pixel.length; i += 3) {
    pixel[i] = paper >> 16
    pixel[i + 1] = (paper >> 8) & 255
    pixel[i + 2] = paper & 255
  }
  return { width, height, pixel }
}

/** Lays one colour on the canvas, in place, through a coverage; what falls outside the canvas is dropped. */
export function fill(canvas: Canvas, coverage: Coverage, colour: Colour): void {
  fillEach(canvas, coverage, () => colour)
}

/** Lays colour on the canvas, in place, pixel by pixel; `colourAt` is asked only where something is covered. */
export function fillEach(canvas: Canvas, coverage: Coverage, colourAt: (x: number, y: number) => Colour): void {
  const { pixel } = canvas
  const firstRow = Math.max(0, -coverage.y)
  const lastRow = Math.min(coverage.height, canvas.height - coverage.y)
  const firstColumn = Math.max(0, -coverage.x)
  const lastColumn = Math.min(coverage.width, canvas.width - coverage.x)
  for (let row = firstRow; row < lastRow; row++) {
    for (let column = firstColumn; column < lastColumn; column++) {
      const amount = coverage.amount[row * coverage.width + column]
      if (amount === 0) continue
      const x = coverage.x + column
      const y = coverage.y + row
      const colour = colourAt(x, y)
      const i = 3 * (y * canvas.width + x)
      pixel[i] = mix(pixel[i], colour >> 16, amount)
      pixel[i + 1] = mix(pixel[i + 1], (colour >> 8) & 255, amount)
      pixel[i + 2] = mix(pixel[i + 2], colour & 255, amount)
    }
  }
}

function mix(below: number, above: number, amount: number): number {
  return Math.round(below + (above - below) * amount)
}

/** The colour of pixel (x, y). */
export function colourOf(canvas: Canvas, x: number, y: number): Colour {
  const i = 3 * (y * canvas.width + x)
  return (canvas.pixel[i] << 16) | (canvas.pixel[i + 1] << 8) | canvas.pixel[i + 2]
}

// Text as filled outlines: glyph curves flattened to polygons. Sizes and places in pixels, y down.

import { type Canvas, type Colour, fill } from './canvas.ts'
import { coverPolygons, type Polygon } from './coverage.ts'
import { drawableText, type Font } from './font.ts'

export interface TextStyle {
  readonly font: Font
  /** Height of the em square, pixels. */
  readonly size: number
  readonly colour: Colour
}

export type Anchor = 'start' | 'middle' | 'end'

/** Kerned, letter by letter: no ligatures, so that "fillet" keeps its width in any size. */
const LAYOUT = { kerning: true, features: { liga: false, rlig: false } }

/** Chords leave a glyph's curve by at most this many pixels. */
const CHORD_ERROR = 0.03

/** Width of one line of text, pixels. */
export function textWidth({ font, size }: TextStyle, text: string): number {
  return font.getAdvanceWidth(drawableText(font, text), size, LAYOUT)
}

/** The text, or as much of it as fits into `width` pixels, ending in an ellipsis. */
export function fitText(style: TextStyle, text: string, width: number): string {
  if (textWidth(style, text) <= width) return text
  const letters = [...text]
  while (letters.length > 0 && textWidth(style, `${letters.join('').trimEnd()}…`) > width) letters.pop()
  return letters.length > 0 ? `${letters.join('').trimEnd()}…` : ''
}

/** Outlines of one line of text with its baseline at y, anchored at x. */
export function textPolygons(style: TextStyle, text: string, x: number, y: number, anchor: Anchor = 'start'): Polygon[] {
  const drawn = drawableText(style.font, text)
  const shift = anchor === 'start' ? 0 : textWidth(style, text) * (anchor === 'middle' ? 0.5 : 1)
  const { commands } = style.font.getPath(drawn, x - shift, y, style.size, LAYOUT)
  const polygons: Polygon[] = []
  let contour: number[] = []
  for (const command of commands) {
    const [fromX, fromY] = contour.slice(-2)
    if (command.type === 'Z') {
      polygons.push(Float64Array.from(contour))
      contour = []
    } else if (command.type === 'Q') {
      appendCubic(contour, fromX, fromY,
        (fromX + 2 * command.x1) / 3, (fromY + 2 * command.y1) / 3,
        (command.x + 2 * command.x1) / 3, (command.y + 2 * command.y1) / 3, command.x, command.y)
    } else if (command.type === 'C') {
      appendCubic(contour, fromX, fromY, command.x1, command.y1, command.x2, command.y2, command.x, command.y)
    } else {
      contour.push(command.x, command.y)
    }
  }
  return polygons
}

/** Writes one line of text on the canvas, in place. */
export function writeText(
  canvas: Canvas, style: TextStyle, text: string, x: number, y: number, anchor: Anchor = 'start'
): void {
  fill(canvas, coverPolygons(textPolygons(style, text, x, y, anchor)), style.colour)
}

/**
 * Appends a cubic's chords. A chord over 1/n of the parameter is off by at most max|B''| / (8 n^2), and
 * max|B''| <= 6 max(|P0 - 2 P1 + P2|, |P1 - 2 P2 + P3|).
 */
function appendCubic(
  contour: number[],
  x0: number, y0: number, x1: number, y1: number, x2: number, y2: number, x3: number, y3: number
): void {
  const bend = 6 * Math.max(Math.hypot(x0 - 2 * x1 + x2, y0 - 2 * y1 + y2), Math.hypot(x1 - 2 * x2 + x3, y1 - 2 * y2 + y3))
  const chords = Math.max(1, Math.ceil(Math.sqrt(bend / (8 * CHORD_ERROR))))
  for (let i = 1; i <= chords; i++) {
    const t = i / chords
    const s = 1 - t
    const [b0, b1, b2, b3] = [s * s * s, 3 * s * s * t, 3 * s * t * t, t * t * t]
    contour.push(b0 * x0 + b1 * x1 + b2 * x2 + b3 * x3, b0 * y0 + b1 * y1 + b2 * y2 + b3 * y3)
  }
}

// The key to the colours: a wedge that stands on a line where the stress is tension and hangs from it where it is
// compression, as deep as the stress is large. Ticks at round numbers and at the ends, in one or two units.

import { plainNumber } from '../format.ts'
import { type Canvas, type Colour, fill, fillEach } from './canvas.ts'
import { coverPolygons } from './coverage.ts'
import { colourOfStress, type Scale } from './scale.ts'
import { strokeLine } from './stroke.ts'
import { type TextStyle, textWidth, writeText } from './text.ts'

/** A row of numbers under the wedge: the scale's stress times `factor`, with the row's unit in words at its end. */
export interface LegendRow {
  readonly factor: number
  readonly unit: string
  readonly style: TextStyle
}

export interface Legend {
  readonly scale: Scale
  /** Left end of the wedge and its lowest point, pixels. */
  readonly x: number
  readonly bottom: number
  readonly length: number
  /** Height of the wedge at zero, and of both its ends together, pixels. */
  readonly least: number
  readonly most: number
  readonly rows: readonly LegendRow[]
  /** Words after the last number where the field goes beyond the scale's ends. */
  readonly beyond: string
  readonly ink: Colour
}

/** Ticks stand at least this many heights of a digit apart. */
const TICK_GAP = 3

/** Draws the legend, in place. */
export function drawLegend(canvas: Canvas, { scale, x, bottom, length, least, most, rows, beyond, ink }: Legend): void {
  const { low, high } = scale
  const size = rows[0].style.size
  const xOf = (stress: number) => x + ((stress - low) / (high - low)) * length
  const stressAt = (column: number) => low + ((column + 0.5 - x) / length) * (high - low)
  const heightOf = (stress: number) => least + ((most - least) * Math.abs(stress)) / (high - low)
  // the line between what stands and what hangs
  const line = bottom - (low < 0 ? heightOf(low) : 0)
  const wedge = (end: number, up: 1 | -1) =>
    Float64Array.of(xOf(0), line, xOf(end), line, xOf(end), line - up * heightOf(end), xOf(0), line - up * least)
  for (const [end, up] of [[high, 1], [low, -1]] as const) {
    if (end === 0) continue
    fillEach(canvas, coverPolygons([wedge(end, up)]), (column) => colourOfStress(scale, stressAt(column)))
  }

  const stroke = size / 16
  fill(canvas, coverPolygons([strokeLine(x, line, x + length, line, stroke)]), ink)
  const ticks = ticksOf(scale, (TICK_GAP * size * (high - low)) / length)
  for (const stress of ticks) {
    const from = line + (stress < 0 ? heightOf(stress) : 0)
    fill(canvas, coverPolygons([strokeLine(xOf(stress), from, xOf(stress), bottom + 0.3 * size, stroke)]), ink)
  }
  rows.forEach(({ factor, unit, style }, row) => {
    const baseline = bottom + size * (1.25 + 1.15 * row)
    let end = 0
    for (const stress of ticks) {
      const number = plainNumber(stress * factor, 3)
      const half = textWidth(style, number) / 2
      // the first number keeps to the left margin
      const middle = Math.max(xOf(stress), x + half)
      writeText(canvas, style, number, middle, baseline, 'middle')
      end = middle + half
    }
    writeText(canvas, style, beyond === '' ? unit : `${beyond} ${unit}`, end + style.size * 0.4, baseline)
  })
}

/** Ends and round numbers of a scale, ascending, at least `gap` apart; zero is kept before an end of small magnitude. */
export function ticksOf({ low, high }: Scale, gap: number): number[] {
  const step = roundStep(Math.max(gap, (high - low) / 8))
  const inner: number[] = []
  // adding zero makes plain zero of a negative one
  for (let k = Math.ceil(low / step); k * step <= high; k++) inner.push(k * step + 0)
  const ends = [low, high].filter((end) => Math.abs(end) >= gap)
  const between = inner.filter((stress) => ends.every((end) => Math.abs(stress - end) >= gap))
  return [...between, ...ends].sort((p, q) => p - q)
}

/** The least of 1, 2, 5 times a power of ten (0.5, 1, 2, ...) that is not below `least`. */
export function roundStep(least: number): number {
  const power = 10 ** Math.floor(Math.log10(least))
  const factor = [1, 2, 5, 10].find((candidate) => candidate * power >= least * (1 - 1e-12))!
  return factor * power
}

// The stress picture of a case: the field in colour on the plate's exact shape, a ring at the peak that governs, the key to
// the colours, and at the foot what was found and what it is worth. Made for a report column of 160 mm: the smallest
// letters come out at about 7 points.

import type { Plate } from '../../case/plate.ts'
import type { PlateCase } from '../../case/schema.ts'
import { LENGTH_UNITS, STRESS_UNITS } from '../../case/units.ts'
import { elementCount } from '../../mesh/mesh.ts'
import type { Solution } from '../../solve/field.ts'
import { reportedSampler } from '../../solve/recovery.ts'
import { percent, plainNumber, withBar } from '../format.ts'
import { principalStresses, type StressState } from '../principal.ts'
import type { RaiserVerdict, Verdict } from '../verdict.ts'
import { blankCanvas, type Canvas, fill, fillEach } from './canvas.ts'
import { coverPolygons, type Polygon } from './coverage.ts'
import { extendField, type PaintedField, paintField } from './field.ts'
import { openFont, type Font } from './font.ts'
import { drawLegend, roundStep } from './legend.ts'
import { drawMesh } from './mesh.ts'
import { encodePng } from './png.ts'
import { colourOfStress, makeScale, type Scale } from './scale.ts'
import { circle, strokeClosed, strokeLine } from './stroke.ts'
import { fitText, type TextStyle, textWidth, writeText } from './text.ts'
import { outlineOf, type View, viewOf } from './view.ts'

/** What is drawn: a verdict with the plate and the field that it was read from. */
export interface FigureSubject {
  readonly verdict: Verdict
  readonly plate: Plate
  readonly solution: Solution
}

export interface FigureOptions {
  /** Pixels, whole numbers of at least 320 by 200; 1600 by 1000 if left out. */
  readonly width?: number
  readonly height?: number
  /** Draws the sides of the elements over the field. */
  readonly mesh?: boolean
}

const PAPER = 0xffffff
const INK = 0x23262b
const GREY = 0x62676f
const RULE = 0xc9ccd1

/** Width on paper, mm: the text column of an A4 report. */
const PRINT_WIDTH = 160

/** Share of the largest magnitude below which a stress beyond the scale's end is a trace that no eye finds. */
const TRACE = 1 / 200

const CAUTION = 'linear elastic, plane stress, static: for a licensed engineer’s judgement'

/**
 * The picture of a solved case as PNG bytes; the same case gives the same bytes.
 * @throws RangeError when the size is not that of a picture
 */
export function renderFigure(subject: FigureSubject, plateCase: PlateCase, options: FigureOptions = {}): Uint8Array {
  const { width = 1600, height = 1000, mesh = false } = options
  if (!(Number.isInteger(width) && Number.isInteger(height) && width >= 320 && height >= 200 && width * height <= 6e7)) {
    throw new RangeError(`a picture of ${width} by ${height} pixels`)
  }
  const canvas = drawFigure(subject, plateCase, width, height, openFont(), mesh)
  const { verdict } = subject
  return encodePng(canvas, PRINT_WIDTH, { title: verdict.case, software: `offchart ${verdict.offchart}` })
}

/** The picture before it is a file. */
export function drawFigure(
  { verdict, plate, solution }: FigureSubject, plateCase: PlateCase, width: number, height: number, font: Font, showsMesh = false
): Canvas {
  // lengths of the layout are given for a picture of 1600 by 1000
  const u = Math.min(width / 1600, height / 1000)
  const margin = 60 * u
  const canvas = blankCanvas(width, height, PAPER)
  const governing = verdict.raisers.find(({ id }) => id === verdict.governing) ?? null
  const shown = quantityOf(verdict, governing, plate)

  const view = viewOf(plate, { left: margin, right: width - margin, top: margin, bottom: height - 345 * u })
  const outline = outlineOf(plate, view)
  const sample = reportedSampler(solution)
  const { mesh, order } = solution
  const field = paintField({ mesh, order, sample, quantity: shown.quantity, view, width, height })
  const scale = scaleOf(field, shown.peak)
  drawField(canvas, outline, field, scale)
  if (showsMesh) drawMesh(canvas, mesh, view, 1.1 * u, INK)
  for (const loop of outline) fill(canvas, coverPolygons(strokeClosed(loop, 2.2 * u)), INK)
  if (governing?.peak) markPeak(canvas, governing.peak.at, verdict, plate, view, u)

  const small = { font, size: 25 * u, colour: GREY }
  const plain = { font, size: 28 * u, colour: INK }
  writeText(canvas, plain, fitText(plain, shown.title, width - 2 * margin), margin, height - 288 * u)
  drawLegend(canvas, {
    scale,
    x: margin,
    bottom: height - 226 * u,
    length: 0.46 * (width - 2 * margin),
    least: 5 * u,
    most: 32 * u,
    rows: shown.rows.map((row, i) => ({ ...row, style: i === 0 ? { ...small, colour: INK } : small })),
    beyond: reachesBeyond(field, scale) ? 'and beyond,' : '',
    ink: INK
  })
  drawLengthBar(canvas, small, width - margin, height - 226 * u, view.scale / plate.unit.length, verdict)
  drawFoot(canvas, verdict, plateCase, governing, elementCount(mesh), plain, small, margin, u)
  return canvas
}

/** What the colours mean. */
interface Shown {
  /** Of a stress state in plate units. */
  readonly quantity: (stress: StressState) => number
  readonly title: string
  readonly rows: readonly { readonly factor: number; readonly unit: string }[]
  /** The governing peak in the same measure, signed; null without one. */
  readonly peak: number | null
}

/**
 * The principal stress that governs: the largest where the governing peak is tension (or there is none), the smallest
 * where it is compression; in multiples of that raiser's net nominal stress (its magnitude, so that signs stay), else in
 * the stress unit.
 */
function quantityOf(verdict: Verdict, governing: RaiserVerdict | null, plate: Plate): Shown {
  const toUnit = plate.unit.stress / STRESS_UNITS[verdict.units.stress]
  const stress = governing?.peak?.stress ?? null
  const which = stress !== null && stress < 0 ? 1 : 0
  const name = which === 0 ? 'Largest principal stress' : 'Smallest principal stress (compression governs)'
  const inUnit = { factor: 1, unit: verdict.units.stress }
  if (!governing?.nominal || !governing.kt) {
    return { quantity: (state) => principalStresses(state)[which] * toUnit, title: name, rows: [inUnit], peak: stress }
  }
  const net = Math.abs(governing.nominal.net)
  return {
    quantity: (state) => (principalStresses(state)[which] * toUnit) / net,
    title: `${name}, in multiples of the net nominal stress at ${governing.id}`,
    rows: [{ factor: 1, unit: '× nominal' }, { ...inUnit, factor: net }],
    peak: stress! / net
  }
}

/** From the least to the greatest painted, zero included; where a governing peak is known, not beyond its magnitude. */
function scaleOf({ low, high }: PaintedField, peak: number | null): Scale {
  const most = peak === null ? Math.max(high, -low) : Math.abs(peak)
  // a plate without any stress still needs a scale
  if (!(most > 0)) return makeScale(0, 1)
  const upper = peak !== null && peak > 0 ? most : Math.min(Math.max(high, 0), most)
  const lower = peak !== null && peak < 0 ? -most : Math.max(Math.min(low, 0), -most)
  return makeScale(-lower < TRACE * most ? 0 : lower, upper < TRACE * most ? 0 : upper)
}

function reachesBeyond({ low, high }: PaintedField, scale: Scale): boolean {
  const trace = TRACE * Math.max(scale.high, -scale.low)
  return high > scale.high + trace || low < scale.low - trace
}

function drawField(canvas: Canvas, outline: readonly Polygon[], field: PaintedField, scale: Scale): void {
  const inside = coverPolygons(outline)
  extendField(field, inside)
  fillEach(canvas, inside, (x, y) => colourOfStress(scale, field.amount[y * field.width + x]))
}

/** A thin ring round the point, kept off the colours by a paler one. */
function markPeak(
  canvas: Canvas, at: readonly [number, number], { units }: Verdict, plate: Plate, view: View, u: number
): void {
  const toPlate = LENGTH_UNITS[units.length] / plate.unit.length
  const ring = circle(view.x0 + view.scale * at[0] * toPlate, view.y0 - view.scale * at[1] * toPlate, 19 * u)
  fill(canvas, coverPolygons(strokeClosed(ring, 5.4 * u)), PAPER)
  fill(canvas, coverPolygons(strokeClosed(ring, 2.2 * u)), INK)
}

/** A length to compare with, in the case's unit, ending at `right` on the line `y`; `pixels` to a mm. */
function drawLengthBar(
  canvas: Canvas, style: TextStyle, right: number, y: number, pixels: number, { units }: Verdict
): void {
  const pixelsPerUnit = pixels * LENGTH_UNITS[units.length]
  const length = roundStep((5 * style.size) / pixelsPerUnit)
  const left = right - length * pixelsPerUnit
  const stroke = style.size / 12
  const end = style.size * 0.35
  for (const [x0, y0, x1, y1] of [[left, y, right, y], [left, y - end, left, y + end], [right, y - end, right, y + end]]) {
    fill(canvas, coverPolygons([strokeLine(x0, y0, x1, y1, stroke)]), style.colour)
  }
  writeText(canvas, style, `${plainNumber(length)} ${units.length}`, (left + right) / 2, y + 1.35 * style.size, 'middle')
}

/** Three lines under a rule: the case and what governs; load and mesh; the caution and the program. */
function drawFoot(
  canvas: Canvas, verdict: Verdict, plateCase: PlateCase, governing: RaiserVerdict | null, elements: number,
  plain: TextStyle, small: TextStyle, margin: number, u: number
): void {
  const right = canvas.width - margin
  const bottom = canvas.height
  fill(canvas, coverPolygons([strokeLine(margin, bottom - 132 * u, right, bottom - 132 * u, 1.6 * u)]), RULE)
  const meshWords = `${elements} elements of order ${verdict.mesh.order}, ${verdict.mesh.dof} unknowns`
  const rows: [left: string, right: string, style: TextStyle, y: number][] = [
    [verdict.case, findingWords(verdict, governing), plain, bottom - 94 * u],
    [loadWords(plateCase), meshWords, small, bottom - 58 * u],
    [CAUTION, `offchart ${verdict.offchart}`, small, bottom - 25 * u]
  ]
  for (const [left, end, style, y] of rows) {
    const shownEnd = fitText(style, end, right - margin)
    writeText(canvas, style, shownEnd, right, y, 'end')
    const room = right - margin - textWidth(style, shownEnd) - 1.5 * style.size
    writeText(canvas, style, fitText(style, left, room), margin, y)
  }
}

/** "relief governs: Kt net 3.113 ± 0.002"; beside a sharp corner only "largest finite peak". */
function findingWords({ units, settled, tolerance, raisers }: Verdict, governing: RaiserVerdict | null): string {
  if (!governing?.peak) return 'no stress raiser with a finite peak'
  const sharp = raisers.filter(({ peak }) => peak === null).map(({ id }) => id)
  const head = sharp.length === 0 ? `${governing.id} governs` : `stress at ${sharp.join(', ')} has no bound; of the others ${governing.id} leads`
  const short = settled ? '' : `, not settled to ${percent(tolerance)}`
  if (governing.kt) {
    const { value, bar } = withBar(governing.kt.net, governing.kt.error)
    return `${head}: Kt net ${value} ± ${bar}${short}`
  }
  const { value, bar } = withBar(governing.peak.stress, governing.peak.error)
  return `${head}: peak ${value} ± ${bar} ${units.stress}${short}`
}

/** "axial 24 kN, moment 3 kN mm, thickness 8 mm". */
function loadWords({ load, units, thickness }: PlateCase): string {
  const words: string[] = []
  if ('axial' in load && load.axial) words.push(`axial ${plainNumber(load.axial)} ${units.force}`)
  if ('moment' in load && load.moment) words.push(`moment ${plainNumber(load.moment)} ${units.force} ${units.length}`)
  if (thickness) words.push(`thickness ${plainNumber(thickness)} ${units.length}`)
  return words.join(', ')
}

// The picture of the study: for each kind of element a panel with the median unknowns (across) against the error (down), one line
// an order, labelled where it begins: at the coarsest mesh of that order.

import { blankCanvas, fill, type Canvas } from '../../src/post/draw/canvas.ts'
import { coverPolygons } from '../../src/post/draw/coverage.ts'
import { openFont } from '../../src/post/draw/font.ts'
import { encodePng } from '../../src/post/draw/png.ts'
import { circle, strokeLine } from '../../src/post/draw/stroke.ts'
import { writeText, type TextStyle } from '../../src/post/draw/text.ts'

/** A line of a panel: unknowns (infinite where the error is not reached) for each of the errors. */
export interface Line {
  readonly label: string
  readonly colour: number
  readonly dof: readonly number[]
}

export interface Panel {
  readonly title: string
  readonly lines: readonly Line[]
}

const WIDTH = 1500
const HEIGHT = 640
const INK = 0x23262b
const GREY = 0x62676f
const RULE = 0xdfe1e4
const DOFS = [100, 1000, 10000, 100000]

/** PNG of panels side by side; `errors` from large to small. */
export function drawPanels(panels: readonly Panel[], errors: readonly number[]): Uint8Array {
  const canvas = blankCanvas(WIDTH, HEIGHT, 0xffffff)
  const font = openFont()
  const small: TextStyle = { font, size: 20, colour: GREY }
  const title: TextStyle = { font, size: 26, colour: INK }
  const [left, top, gap, bottom] = [90, 70, 50, 90]
  const width = (WIDTH - left - 30 - gap * (panels.length - 1)) / panels.length
  const height = HEIGHT - top - bottom
  const [most, least] = [errors[0], errors[errors.length - 1]]
  const yOf = (error: number) => top + (height * Math.log(most / error)) / Math.log(most / least)
  panels.forEach((panel, p) => {
    const x0 = left + p * (width + gap)
    const xOf = (dof: number) => x0 + (width * Math.log(dof / DOFS[0])) / Math.log(DOFS[DOFS.length - 1] / DOFS[0])
    writeText(canvas, title, panel.title, x0, top - 24)
    for (const dof of DOFS) {
      line(canvas, xOf(dof), top, xOf(dof), top + height, 1, RULE)
      // the last one would run into the next panel
      if (dof < DOFS[DOFS.length - 1]) writeText(canvas, small, dof.toLocaleString('en').replaceAll(',', ' '), xOf(dof), top + height + 28, 'middle')
    }
    for (let power = Math.round(Math.log10(most)); power >= Math.round(Math.log10(least)); power--) {
      line(canvas, x0, yOf(10 ** power), x0 + width, yOf(10 ** power), 1, RULE)
      if (p === 0) writeText(canvas, small, `1e${power}`, x0 - 12, yOf(10 ** power) + 7, 'end')
    }
    for (const { label, colour, dof } of panel.lines) {
      // one mesh reaches many errors: the smallest of them is the point that stands for it
      const points = errors.flatMap((error, i) => (Number.isFinite(dof[i]) && dof[i] !== dof[i + 1] ? [[xOf(dof[i]), yOf(error)]] : []))
      points.slice(1).forEach(([x, y], i) => line(canvas, points[i][0], points[i][1], x, y, 3, colour))
      const [x, y] = points[0]
      fill(canvas, coverPolygons([circle(x, y, 5)]), colour)
      writeText(canvas, { font, size: 22, colour }, label, x, y - 12, 'middle')
    }
    writeText(canvas, small, 'unknowns', x0 + width / 2, top + height + 62, 'middle')
  })
  writeText(canvas, small, 'error', left - 12, top - 24, 'end')
  return encodePng(canvas, 160, { title: 'Error of the peak against unknowns', software: 'offchart' })
}

function line(canvas: Canvas, x0: number, y0: number, x1: number, y1: number, width: number, colour: number): void {
  if (x0 === x1 && y0 === y1) return
  fill(canvas, coverPolygons([strokeLine(x0, y0, x1, y1, width)]), colour)
}

// The words and the table that `verify` prints for one case. Fits 80 columns; its prose is wrapped there.

import { decimalsFor, fixed, percent, plainNumber, withBar } from './format.ts'
import { COLUMNS, GLUE, wrap } from './wrap.ts'
import type { RaiserVerdict, Verdict } from './verdict.ts'

/** What the numbers are and are not; printed under every table and in the command's help. */
export const CAUTIONS =
  'Linear elastic, plane stress, static, small displacements, for the plate as drawn. A check on charts, ' +
  'not a substitute for local codes and a licensed engineer\'s judgement.'

export interface ReportOptions {
  /** Adds each raiser's history over meshes and orders. */
  readonly verbose: boolean
  /** Emphasis by terminal escape sequences. */
  readonly colour: boolean
  /** The same case solved with other kinds of elements, to stand beside it. */
  readonly others?: readonly Verdict[]
}

/** The report on one case, with a line feed at the end. */
export function reportText(verdict: Verdict, { verbose, colour, others = [] }: ReportOptions): string {
  const style = colour ? ANSI : PLAIN
  const blocks = [
    [style.strong(verdict.case), ...(verdict.file === verdict.case ? [] : [style.quiet(verdict.file)])],
    raiserTable(verdict, style),
    wrap(governingSentence(verdict)),
    ...verdict.raisers.map((raiser) => raiserLines(verdict, raiser, verbose)),
    others.length > 0 ? elementTable([verdict, ...others]) : [],
    [...settledLines(verdict, style), ...evidenceLines(verdict)],
    verdict.warnings.flatMap((warning) => wrap(`Warning: ${warning}`, '  ').map(style.warn)),
    wrap(CAUTIONS).map(style.quiet)
  ]
  return blocks.filter((block) => block.length > 0).map((block) => block.join('\n')).join('\n\n') + '\n'
}

interface Style {
  strong(text: string): string
  quiet(text: string): string
  warn(text: string): string
}

const PLAIN: Style = { strong: (text) => text, quiet: (text) => text, warn: (text) => text }

const ANSI: Style = {
  strong: (text) => `\x1b[1m${text}\x1b[22m`,
  quiet: (text) => `\x1b[2m${text}\x1b[22m`,
  warn: (text) => `\x1b[33m${text}\x1b[39m`
}

/** Coordinates are printed to about a hundredth of a millimetre. */
const COORDINATE_DECIMALS = { mm: 2, cm: 3, m: 5, in: 3 } as const

const NOTHING = '–'

/** One row a raiser, decimal points under each other; the governing one is marked. */
function raiserTable(verdict: Verdict, style: Style): string[] {
  const { raisers, units, governing } = verdict
  if (raisers.length === 0) return ['No stress raiser: no hole, notch or shoulder in this plate.']
  const decimals = COORDINATE_DECIMALS[units.length]
  const columns: { head: string; cells: string[] }[] = [
    { head: 'raiser', cells: raisers.map(({ id }) => id) },
    { head: 'kind', cells: raisers.map(({ kind }) => kind) },
    { head: 'Kt net', cells: alignBarred(raisers.map(({ kt }) => kt && withBar(kt.net, kt.error))) },
    { head: 'Kt gross', cells: alignDecimals(raisers.map(({ kt }) => (kt ? grossText(kt) : NOTHING))) },
    { head: `peak, ${units.stress}`, cells: alignBarred(raisers.map(({ peak }) => peak && withBar(peak.stress, peak.error))) },
    { head: `x, ${units.length}`, cells: alignDecimals(raisers.map(({ peak }) => (peak ? fixed(peak.at[0], decimals) : NOTHING))) },
    { head: `y, ${units.length}`, cells: alignDecimals(raisers.map(({ peak }) => (peak ? fixed(peak.at[1], decimals) : NOTHING))) }
  ]
  const widthOf = ({ head, cells }: { head: string; cells: string[] }) => Math.max(head.length, ...cells.map((cell) => cell.length))
  const total = () => columns.reduce((sum, column) => sum + 2 + widthOf(column), 0)
  // the kind is repeated by most ids: it goes first, then the tail of long ids
  if (total() > COLUMNS) columns.splice(1, 1)
  const excess = total() - COLUMNS
  if (excess > 0) {
    const room = Math.max(6, widthOf(columns[0]) - excess)
    columns[0].cells = columns[0].cells.map((id) => (id.length > room ? `${id.slice(0, room - 1)}…` : id))
  }
  const widths = columns.map(widthOf)
  const line = (cells: string[]) => cells.map((cell, k) => cell.padEnd(widths[k])).join('  ').trimEnd()
  return [
    style.quiet(`  ${line(columns.map(({ head }) => head))}`),
    ...raisers.map(({ id }, row) => {
      const cells = line(columns.map((column) => column.cells[row]))
      return id === governing ? `${style.strong(`> ${cells}`)}` : `  ${cells}`
    })
  ]
}

/** Kt gross to the digits that the same relative bar leaves it. */
function grossText({ net, gross, error }: { net: number; gross: number; error: number }): string {
  return fixed(gross, decimalsFor(gross, (error * gross) / net))
}

/** Pads so that decimal points stand under each other; cells without digits stay at the left. */
function alignDecimals(cells: string[]): string[] {
  const whole = (cell: string) => (cell.includes('.') ? cell.indexOf('.') : cell.length)
  const before = Math.max(...cells.map((cell) => (cell === NOTHING ? 0 : whole(cell))))
  const padded = cells.map((cell) => (cell === NOTHING ? cell : ' '.repeat(before - whole(cell)) + cell))
  const width = Math.max(...padded.map((cell) => cell.length))
  return padded.map((cell) => cell.padEnd(width))
}

function alignBarred(cells: ({ value: string; bar: string } | null)[]): string[] {
  const values = alignDecimals(cells.map((cell) => cell?.value ?? NOTHING))
  const bars = alignDecimals(cells.map((cell) => cell?.bar ?? NOTHING))
  return cells.map((cell, k) => (cell ? `${values[k]} ± ${bars[k]}`.trimEnd() : NOTHING))
}

function governingSentence({ governing, margin, raisers }: Verdict): string {
  if (governing === null) return raisers.length === 0 ? '' : 'No raiser has a finite peak stress.'
  const sharp = raisers.filter(({ peak }) => peak === null).map(({ id }) => id)
  if (sharp.length > 0) return `${governing} has the largest finite peak; the stress at ${sharp.join(', ')} has no bound.`
  if (margin === null) return `${governing} governs: it is the only stress raiser.`
  const magnitude = ({ peak }: RaiserVerdict) => Math.abs(peak?.stress ?? 0)
  const next = raisers.filter(({ id }) => id !== governing).reduce((a, b) => (magnitude(b) > magnitude(a) ? b : a)).id
  if (margin === 0) return `${governing} governs in a tie: the peak of ${next} is the same within the error bars.`
  const lead = margin < 1 ? `${percent(margin)} above` : `${plainNumber(1 + margin, 2)} times`
  return `${governing} governs: its peak is ${lead} that of ${next}.`
}

/** Where its peak sits, its nominal stress or why it has none, and on request its history. */
function raiserLines(verdict: Verdict, raiser: RaiserVerdict, verbose: boolean): string[] {
  const { stress } = verdict.units
  const { nominal, peak, kt, why } = raiser
  const lines = [raiser.id]
  const add = (text: string) => lines.push(...wrap(text, '    ', '  '))
  if (peak) add(`peak ${peak.where}`)
  if (kt === null && why) add(peak ? `no Kt: ${why}` : why)
  if (nominal && kt) {
    add(`net nominal ${glueTerms(nominal.how)} = ${plainNumber(nominal.net, 4)} ${stress}; gross ${plainNumber(nominal.gross, 4)} ${stress}`)
    if (nominal.flexure !== null && kt.flexure !== null) {
      add(
        `with the bending of the eccentric section ${plainNumber(nominal.flexure, 4)} ${stress}: ` +
        `Kt ${fixed(kt.flexure, decimalsFor(kt.flexure, (kt.error * kt.flexure) / kt.net))}`
      )
    }
  }
  if (verbose && raiser.history.length > 0) {
    lines.push(...historyTable(raiser).map((line) => `  ${line}`))
    if (peak) add(`bar ± ${plainNumber(kt ? kt.error : peak.error, 2)}${kt ? '' : ` ${stress}`}: ${BAR_WORDS[peak.setBy]}`)
  }
  return lines
}

/** Words for the kinds of elements. */
const KIND_WORDS = { triangle: 'triangles only', mixed: 'quads along arcs', quad: 'quads only' } as const

/** One row a kind of elements: the mesh, and Kt (peak where there is no Kt) of the first verdict's governing raiser. */
function elementTable(verdicts: readonly Verdict[]): string[] {
  const { governing, units } = verdicts[0]
  const shown = verdicts.map(({ raisers }) => raisers.find(({ id }) => id === governing) ?? null)
  const barred = shown.map((raiser) => {
    if (!raiser?.peak) return null
    return raiser.kt ? withBar(raiser.kt.net, raiser.kt.error) : withBar(raiser.peak.stress, raiser.peak.error)
  })
  const cells = alignBarred(barred)
  const head = ['elements', 'triangles', 'quads', 'order', 'unknowns', 'ms', shown[0]?.kt ? 'Kt net' : `peak, ${units.stress}`]
  const rows = verdicts.map(({ mesh, time }, k) => [
    KIND_WORDS[mesh.elements],
    String(mesh.triangles),
    String(mesh.quads),
    String(mesh.order),
    String(mesh.dof),
    String(Math.round(time.total)),
    cells[k]
  ])
  const table = [head, ...rows]
  const widths = head.map((_, column) => Math.max(...table.map((row) => row[column].length)))
  const lines = table.map((row) =>
    row.map((cell, k) => (k === 0 || k === head.length - 1 ? cell.padEnd(widths[k]) : cell.padStart(widths[k]))).join('  ').trimEnd()
  )
  return [governing === null ? 'by kind of elements' : `${governing}, by kind of elements`, ...lines.map((line) => `  ${line}`)]
}

/** What set a bar, in words. */
const BAR_WORDS = {
  order: 'the last step in order, two or three times',
  'two orders': 'a part of the last two steps in order',
  mesh: 'twice the step between the last two meshes',
  'free edge': 'the stress left over on the free edge at the peak',
  step: 'the step of the edge stress beside the peak',
  rounding: 'what rounding may leave'
} as const

/** Mesh, order, unknowns, Kt (peak where there is no Kt), its change since the step before, and what should be zero at the peak. */
function historyTable({ history, kt }: RaiserVerdict): string[] {
  const quantity = (k: number) => history[k].kt ?? history[k].peak
  const decimals = decimalsFor(quantity(history.length - 1), 0)
  const rows = history.map((step, k) => [
    String(step.mesh),
    String(step.order),
    String(step.dof),
    fixed(quantity(k), decimals),
    k === 0 ? '' : changeText(quantity(k) / quantity(k - 1) - 1),
    percent(step.freeEdge, 2),
    percent(step.step, 2)
  ])
  const table = [['mesh', 'order', 'unknowns', kt ? 'Kt net' : 'peak', 'change', 'free edge', 'step'], ...rows]
  const widths = table[0].map((_, column) => Math.max(...table.map((row) => row[column].length)))
  return table.map((row) => row.map((cell, column) => cell.padStart(widths[column])).join('  ').trimEnd())
}

/** A formula that can be broken only before an =, + or − that stands outside brackets. */
function glueTerms(formula: string): string {
  let depth = 0
  let glued = ''
  for (let k = 0; k < formula.length; k++) {
    if (formula[k] === '(') depth++
    if (formula[k] === ')') depth--
    const mayBreak = depth === 0 && /[=+−]/.test(formula[k + 1] ?? '') && formula[k + 2] === ' '
    glued += formula[k] === ' ' && !mayBreak ? GLUE : formula[k]
  }
  return glued
}

function changeText(change: number): string {
  if (!Number.isFinite(change)) return ''
  const text = `${(100 * Math.abs(change)).toPrecision(2)}`
  return `${change < 0 ? '−' : '+'}${text.includes('e') ? plainNumber(100 * Math.abs(change), 2) : text} %`
}

function settledLines({ settled, tolerance, fixedOrder, raisers }: Verdict, style: Style): string[] {
  if (raisers.length === 0) return []
  if (settled) return wrap(`Settled: every error bar is within the tolerance of ${percent(tolerance)}.`)
  if (fixedOrder !== null) return wrap(`Order ${fixedOrder} was fixed: the bars above are what it gives, wider than the tolerance of ${percent(tolerance)}.`)
  return wrap(`NOT SETTLED to the tolerance of ${percent(tolerance)}: the bars above are what was reached.`).map(style.warn)
}

function evidenceLines({ checks, mesh, time }: Verdict): string[] {
  const count = (n: number, noun: string) => `${n} ${noun}${n === 1 ? '' : 's'}`
  return [
    ...wrap(
      `checks  unbalanced load ${checks.balance.toExponential(1)}, residual ${checks.residual.toExponential(1)}, ` +
      `stress left on free edges ${percent(checks.freeEdge)} of the peak`,
      '        '
    ),
    ...wrap(
      `mesh    ${count(mesh.triangles, 'triangle')}, ${count(mesh.quads, 'quad')}, order ${mesh.order}; ` +
      `${count(mesh.dof, 'unknown')}; smallest angle ${Math.round(mesh.smallestAngle)}°`,
      '        '
    ),
    `time    ${Math.round(time.total)} ms, of which mesh ${Math.round(time.mesh)}, solve ${Math.round(time.solve)}`
  ]
}

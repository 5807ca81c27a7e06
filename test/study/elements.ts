// `npm run study:elements`: unknowns and time against the error of the peak, for triangles, mixed meshes and quads at
// orders 1 to 8, on 18 plates (cases.json). Prints the table of DEVELOPERS.md and draws its picture. It is no test: nothing here passes or fails.
//
// The truth of each raiser is its peak at order 10 on triangles three times halved at the raisers. The error of a solve is the
// largest over the raisers, relative to the raiser's peak or, where that is larger, to a tenth of the governing one.

import { mkdirSync, writeFileSync } from 'node:fs'
import { buildPlate } from '../../src/case/build.ts'
import type { Plate } from '../../src/case/plate.ts'
import { readCase } from '../../src/case/read.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import type { ElementKind } from '../../src/mesh/mesh.ts'
import { readRaisers } from '../../src/post/pass.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import cases from './cases.json' with { type: 'json' }
import { drawPanels } from './picture.ts'

/** One solve. */
export interface Trial {
  readonly plate: string
  readonly kind: ElementKind
  readonly order: number
  readonly level: number
  readonly dof: number
  /** Milliseconds for mesh and solve, warm. */
  readonly time: number
  readonly error: number
}

const KINDS: readonly ElementKind[] = ['triangle', 'mixed', 'quad']
const ORDERS = [1, 2, 4, 5, 6, 8]
const TRUTH = { order: 10, halvings: 3 }
/** Unknowns beyond which no trial goes. */
const MOST_DOFS = 60_000
const TARGETS = [1e-2, 1e-3, 1e-4, 1e-5]

function solveOn(plate: Plate, kind: ElementKind, order: number, halvings: number, everywhere: boolean) {
  const fineness = { raiser: plate.raisers.map(() => (everywhere ? 0 : halvings)), all: everywhere ? halvings : 0 }
  const start = performance.now()
  const mesh = meshPlate(plate, fineness, kind)
  const solution = solvePlate(plate, mesh, order)
  const time = performance.now() - start
  const pass = readRaisers(solution, 1)
  return { dof: pass.dof, time, peaks: pass.raisers.map((reading) => reading?.magnitude ?? NaN) }
}

function errorOf(peaks: readonly number[], truth: readonly number[]): number {
  const floor = 0.1 * Math.max(...truth)
  return Math.max(...truth.map((t, r) => Math.abs(peaks[r] - t) / Math.max(t, floor)))
}

function trialsOf(name: string, plate: Plate): Trial[] {
  const truth = solveOn(plate, 'triangle', TRUTH.order, TRUTH.halvings, false).peaks
  const trials: Trial[] = []
  for (const kind of KINDS) {
    for (const order of ORDERS) {
      for (let level = 0; level < 7; level++) {
        const everywhere = order <= 2
        const { dof, time, peaks } = solveOn(plate, kind, order, level, everywhere)
        trials.push({ plate: name, kind, order, level, dof, time, error: errorOf(peaks, truth) })
        if (dof * (everywhere ? 4 : 1.5) > MOST_DOFS || (!everywhere && level === 3)) break
      }
    }
  }
  return trials
}

/** Least amount (unknowns, ms) for an error on the way of the trials, between two of them along a straight line in logarithms. */
function amountFor(target: number, trials: readonly Trial[], amount: (trial: Trial) => number): number {
  // the error that holds from here on: what comes by chance and goes again does not count
  const held = trials.map((_, i) => Math.max(...trials.slice(i).map(({ error }) => error)))
  const first = held.findIndex((error) => error <= target)
  if (first <= 0) return first === 0 ? amount(trials[0]) : Infinity
  const share = Math.log(held[first - 1] / target) / Math.log(held[first - 1] / held[first])
  return amount(trials[first - 1]) ** (1 - share) * amount(trials[first]) ** share
}

const median = (values: readonly number[]) => values.toSorted((a, b) => a - b)[Math.floor((values.length - 1) / 2)]

function tableOf(trials: readonly Trial[], plates: readonly string[]): string {
  const rows = KINDS.flatMap((kind) =>
    ORDERS.map((order) => {
      const own = plates.map((name) => trials.filter((t) => t.plate === name && t.kind === kind && t.order === order))
      const cells = TARGETS.flatMap((target) => {
        const dof = median(own.map((list) => amountFor(target, list, (t) => t.dof)))
        const time = median(own.map((list) => amountFor(target, list, (t) => t.time)))
        return [Number.isFinite(dof) ? String(Math.round(dof / 10) * 10) : '–', Number.isFinite(time) ? time.toFixed(0) : '–']
      })
      return `| ${kind} | ${order} | ${cells.join(' | ')} |`
    })
  )
  const heads = TARGETS.map((target) => `${target.toExponential(0)}: dof | ms`)
  return [`| elements | order | ${heads.join(' | ')} |`, `| --- | --- | ${TARGETS.map(() => '---: | ---:').join(' | ')} |`, ...rows].join('\n')
}

const COLOURS = [0xc9b458, 0x8aa05a, 0x4e8a7a, 0x2f7f9a, 0x2f5690, 0x3a2f6b]

function pictureOf(trials: readonly Trial[], plates: readonly string[]): Uint8Array {
  const errors = Array.from({ length: 25 }, (_, i) => 10 ** (-i / 4))
  const panels = KINDS.map((kind) => ({
    title: kind === 'mixed' ? 'quads along arcs, triangles elsewhere' : `${kind}s only`,
    lines: ORDERS.map((order, i) => {
      const own = plates.map((name) => trials.filter((t) => t.plate === name && t.kind === kind && t.order === order))
      return { label: String(order), colour: COLOURS[i], dof: errors.map((error) => median(own.map((list) => amountFor(error, list, (t) => t.dof)))) }
    })
  }))
  return drawPanels(panels, errors)
}

const plates = cases.map((fields) => ({ name: fields.name, plate: buildPlate(readCase(JSON.stringify(fields), fields.name)) }))
// warm up: the first solve of a process is several times slower
solveOn(plates[0].plate, 'mixed', 6, 0, false)
const trials = plates.flatMap(({ name, plate }) => {
  if (process.stderr.isTTY) console.error(name)
  return trialsOf(name, plate)
})
const names = plates.map(({ name }) => name)
console.log(`Median of ${names.length} plates: unknowns and milliseconds for a relative error of the peaks\n`)
console.log(tableOf(trials, names))
mkdirSync('.study', { recursive: true })
writeFileSync('.study/elements.json', JSON.stringify(trials))
writeFileSync('.study/elements.png', pictureOf(trials, names))

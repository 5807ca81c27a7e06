// `npm run bar-study -- [how many] [first seed]`: do the error bars hold? Random plates (400 from seed 1 by default), each verified at the
// default tolerance and solved again far finer: triangles only, three times halved at the raisers, order 8; nothing is shared but the
// geometry. Resumes where it was stopped (.study/bars.jsonl holds a line a plate), prints a summary and puts it into the README.
// It is no test: it says what it found.

import { appendFileSync, existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { buildPlate } from '../../src/case/build.ts'
import { readCase } from '../../src/case/read.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { readRaisers } from '../../src/post/pass.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { wrap } from '../../src/post/wrap.ts'
import { verify } from '../../src/verify.ts'
import { randomCase } from '../support/random.ts'

const FOLDER = '.study'
const LINES = `${FOLDER}/bars.jsonl`
const FINE = { halvings: 3, order: 8 }
/** Error below which the fine run itself can't tell, relative to the peak. */
const FLOOR = 1e-7

/** One plate: what its raisers' bars were and how far their peaks were off, relative to the fine peak. */
interface Line {
  readonly seed: number
  readonly settled: boolean
  /** Solves of the loop, by mesh and order: "1/6" for the last. */
  readonly last: string
  readonly dof: number
  readonly ms: number
  readonly raisers: readonly { readonly id: string; readonly bar: number; readonly error: number }[]
}

function studyPlate(seed: number): Line {
  const plateCase = readCase(JSON.stringify(randomCase(seed)), `seed ${seed}`)
  const { verdict } = verify(plateCase, { file: `seed ${seed}`, clock: () => performance.now() })
  const plate = buildPlate(plateCase)
  const fineness = { raiser: plate.raisers.map(() => FINE.halvings), all: 0 }
  const fine = readRaisers(solvePlate(plate, meshPlate(plate, fineness, 'triangle'), FINE.order), 1)
  const steps = verdict.raisers[0]?.history ?? []
  const last = steps[steps.length - 1]
  return {
    seed,
    settled: verdict.settled,
    last: last ? `${last.mesh}/${last.order}` : '',
    dof: verdict.mesh.dof,
    ms: verdict.time.total,
    raisers: verdict.raisers.flatMap(({ id, peak }, r) => {
      if (!peak) return []
      const truth = fine.raisers[r]!.magnitude * plate.unit.stress
      return [{ id, bar: peak.error / truth, error: Math.abs(Math.abs(peak.stress) - truth) / truth }]
    })
  }
}

const share = (values: readonly number[], part: number) => values.toSorted((a, b) => a - b)[Math.round(part * (values.length - 1))]

function summaryOf(lines: readonly Line[]): string {
  const plates = lines.filter(({ raisers }) => raisers.length > 0)
  const raisers = plates.flatMap((line) => line.raisers)
  const misses = raisers.filter(({ bar, error }) => error > bar + FLOOR)
  const ratios = raisers.map(({ bar, error }) => bar / Math.max(error, FLOOR))
  const settled = plates.filter((line) => line.settled).length
  const stages = new Map<string, number>()
  for (const { last } of plates) stages.set(last, (stages.get(last) ?? 0) + 1)
  const percent = (n: number, of: number) => `${((100 * n) / of).toFixed(n === of ? 0 : 1)} %`
  const byStage = [...stages].toSorted().map(([last, n]) => `mesh ${last.replace('/', ' order ')} ${percent(n, plates.length)}`)
  const tight = ratios.filter((_, i) => raisers[i].error > FLOOR)
  const errors = raisers.map(({ error }) => error)
  const seconds = (part: number) => `${(share(plates.map(({ ms }) => ms), part) / 1000).toFixed(1)} s`
  const sentences = [
    `${plates.length} random plates with ${raisers.length} stress raisers: ${misses.length === 0 ? 'no value' : `${misses.length} values`} outside its bar. ${percent(settled, plates.length)} of the plates`,
    `settled to 0.1 % (at ${byStage.join(', ')}).`,
    `The bar is ${share(ratios, 0.5).toFixed(0)} times the true error in the median, ${share(ratios, 0.95).toFixed(0)} times at 95 %, at least ${Math.min(...tight).toFixed(1)} times;`,
    `the error is ${share(errors, 0.5).toExponential(0)} in the median, ${share(errors, 1).toExponential(0)} at most. A plate took ${seconds(0.5)} in the median, ${seconds(0.95)} at 95 %;`,
    `${share(plates.map(({ dof }) => dof), 0.5)} unknowns in the median.`
  ]
  return wrap(sentences.join(' ')).join('\n')
}

const count = Number(process.argv[2] ?? 400)
const start = Number(process.argv[3] ?? 1)
mkdirSync(FOLDER, { recursive: true })
const known = existsSync(LINES) ? readFileSync(LINES, 'utf8').split('\n').filter(Boolean).map((line) => JSON.parse(line) as Line) : []
const lines = new Map(known.map((line) => [line.seed, line]))
for (let seed = start; seed < start + count; seed++) {
  if (lines.has(seed)) continue
  const line = studyPlate(seed)
  lines.set(seed, line)
  appendFileSync(LINES, `${JSON.stringify(line)}\n`)
  if (process.stderr.isTTY) process.stderr.write(`\rplate ${seed - start + 1} of ${count}`)
}
const all = [...lines.values()].toSorted((a, b) => a.seed - b.seed)
for (const { seed, raisers } of all) {
  for (const { id, bar, error } of raisers) {
    if (error <= bar + FLOOR) continue
    const file = `${FOLDER}/miss-${seed}.json`
    writeFileSync(file, JSON.stringify(randomCase(seed), null, 2))
    console.log(`miss: ${id}, bar ${bar.toExponential(1)}, error ${error.toExponential(1)}: ${file}`)
  }
}
const summary = summaryOf(all)
console.log(summary)
const readme = readFileSync('README.md', 'utf8')
writeFileSync('README.md', readme.replace(/(<!-- bar-study -->\n)[\s\S]*?(<!-- \/bar-study -->)/, `$1${summary}\n$2`))

// `npm run bench`: stage times, unknowns and peak memory of four standard cases, each in a process of its own (cold), then warm.
// It is no test: nothing here passes or fails.

import { execFileSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { readCase } from './case/read.ts'
import { verify } from './verify.ts'

const STANDARD: Record<string, object> = {
  'strip, one hole': {
    plate: { sections: [{ width: 50, length: 250 }] },
    holes: [{ shape: 'circle', diameter: 25, at: [125, 0] }]
  },
  'lift link, hole at the shoulder': {
    plate: { sections: [{ width: 60, length: 110 }, { width: 40, length: 110 }], fillets: [8] },
    holes: [{ shape: 'circle', diameter: 16, at: [95, 0] }]
  },
  'hanger strap, ligament 2 % of the hole': {
    plate: { sections: [{ width: 60, length: 280 }] },
    holes: [{ shape: 'circle', diameter: 24, at: [140, 17.52] }]
  },
  'rack plate, ten holes and two notches': {
    plate: { sections: [{ width: 90, length: 520 }] },
    holes: Array.from({ length: 10 }, (_, i) => ({ shape: 'circle', diameter: 14, at: [80 + 40 * i, i % 2 === 0 ? 12 : -12] })),
    notches: [{ side: 'both', x: 35, depth: 8, radius: 4 }, { side: 'top', x: 485, depth: 10, radius: 3, angle: 60 }]
  }
}
const WARM_RUNS = 5

/** One case in this process: its times in ms, cold and the median of some warm runs, and the process's peak memory. */
function measure(name: string): void {
  const text = JSON.stringify({ name, thickness: 8, load: { axial: 20000 }, ...STANDARD[name] })
  const run = () => verify(readCase(text, name), { file: name, clock: () => performance.now() }).verdict
  const cold = run()
  const warm = Array.from({ length: WARM_RUNS }, run).toSorted((a, b) => a.time.total - b.time.total)[Math.floor(WARM_RUNS / 2)]
  const memory = process.resourceUsage().maxRSS / 1024
  const ms = ({ mesh, solve, total }: typeof cold.time) => [mesh, solve, total].map((t) => t.toFixed(0).padStart(6)).join('')
  console.log(
    `${name.padEnd(40)}${String(cold.mesh.triangles).padStart(6)}${String(cold.mesh.order).padStart(4)}${String(cold.mesh.dof).padStart(8)} |${ms(cold.time)} |${ms(warm.time)} |${memory.toFixed(0).padStart(5)}${cold.settled ? '' : '  not settled'}`
  )
}

const one = process.argv[2]
if (one) measure(one)
else {
  console.log(`${''.padEnd(40)}                   |   cold run, ms    |   warm run, ms    | peak`)
  console.log(`${'case'.padEnd(40)}  tri.  p     dof |  mesh solve total |  mesh solve total |   MB`)
  for (const name of Object.keys(STANDARD)) process.stdout.write(execFileSync(process.execPath, [fileURLToPath(import.meta.url), name]))
}

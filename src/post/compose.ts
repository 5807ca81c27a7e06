// From the passes of the accuracy loop to the verdict: plate units become the case's units, bars and nominals become Kt.

import { STRESS_UNITS, LENGTH_UNITS } from '../case/units.ts'
import type { PlateCase } from '../case/schema.ts'
import { checkMesh } from '../mesh/check.ts'
import { quadCount, triangleCount, type ElementKind } from '../mesh/mesh.ts'
import type { Solution } from '../solve/field.ts'
import { VERSION } from '../version.ts'
import { errorBar, type Bar, type Evidence } from './bar.ts'
import { nominalStress } from './nominal.ts'
import { boundarySidesOf, type Pass } from './pass.ts'
import { foremost, freeEdgeResidual, type EdgePeak } from './peak.ts'
import type { Peak, RaiserVerdict, Verdict } from './verdict.ts'
import { eccentricWarnings, elsewhereWarning, nearEndWarnings, sharpWarnings, unsettledWarnings, yieldWarnings } from './warnings.ts'
import { whereOnEdge } from './where.ts'

/** Share of the governing peak below which a raiser's own peak no longer sets the width of bar that is wanted of it. */
const MINOR = 0.1

/** The bar of each raiser after the passes so far, null for sharp ones. */
export function barsOf(passes: readonly Pass[], raisers: number): (Bar | null)[] {
  return Array.from({ length: raisers }, (_, r) => {
    const evidence = passes.flatMap(({ mesh, order, raisers: readings }): Evidence[] => {
      const reading = readings[r]
      return reading ? [{ mesh, order, peak: reading.magnitude, leftOver: reading.leftOver, step: reading.step }] : []
    })
    return evidence.length > 0 ? errorBar(evidence) : null
  })
}

/** Indices of the raisers whose bar is wider than the tolerance times their peak (or a tenth of the governing one). */
export function unsettledRaisers(passes: readonly Pass[], bars: readonly (Bar | null)[], tolerance: number): number[] {
  const last = passes[passes.length - 1].raisers
  const governing = Math.max(...last.map((reading) => reading?.magnitude ?? 0))
  return bars.flatMap((bar, r) => {
    const wanted = tolerance * Math.max(last[r]?.magnitude ?? 0, MINOR * governing)
    return bar && !(bar.error <= wanted) ? [r] : []
  })
}

export interface Findings {
  readonly plateCase: PlateCase
  readonly file: string
  readonly tolerance: number
  /** The order that was fixed by hand, null for the accuracy loop. */
  readonly fixedOrder: number | null
  /** The kind of elements that was meshed. */
  readonly elements: ElementKind
  readonly passes: readonly Pass[]
  /** The last pass's solution. */
  readonly solution: Solution
  readonly time: Verdict['time']
}

/** The verdict of a case in the case's units. */
export function composeVerdict({ plateCase, file, tolerance, fixedOrder, elements, passes, solution, time }: Findings): Verdict {
  const { plate, mesh, order } = solution
  const { units } = plateCase
  const toStress = plate.unit.stress / STRESS_UNITS[units.stress]
  const toLength = plate.unit.length / LENGTH_UNITS[units.length]
  const bars = barsOf(passes, plate.raisers.length)
  const unsettled = unsettledRaisers(passes, bars, tolerance)
  const last = passes[passes.length - 1]

  const peaks: (EdgePeak | null)[] = last.raisers.map((reading, r) => {
    if (!reading) return null
    // the place and sign of the one that counts, the size of the largest: a tie must not lower it
    const chosen = foremost(reading.peaks, reading.magnitude > 0 ? bars[r]!.error / reading.magnitude : 0)
    return { ...chosen, stress: chosen.stress < 0 ? -reading.magnitude : reading.magnitude }
  })
  const raisers = plate.raisers.map((raiser, r): RaiserVerdict => {
    const found = nominalStress(plate, r, units)
    const nominal = 'why' in found ? null : found
    const history = passes.map(({ mesh: number, order: passOrder, dof, raisers: readings }) => {
      const { magnitude, leftOver, step } = readings[r] ?? { magnitude: 0, leftOver: 0, step: 0 }
      const share = (part: number) => (magnitude > 0 ? part / magnitude : 0)
      const peak = magnitude * toStress
      const kt = nominal ? peak / Math.abs(nominal.net) : null
      return { mesh: number, order: passOrder, dof, kt, peak, freeEdge: share(leftOver), step: share(step) }
    })
    const base = { id: raiser.id, kind: raiser.kind, nominal, chart: null }
    const top = peaks[r]
    if (!top) return { ...base, kt: null, peak: null, why: raiser.sharp!, history: [] }
    const error = bars[r]!.error * toStress
    const peak: Peak = {
      stress: top.stress * toStress,
      error,
      setBy: bars[r]!.source,
      at: [top.at[0] * toLength, top.at[1] * toLength],
      where: whereOnEdge(plate, top.loop, top.edge, top.t, units)
    }
    if (!nominal) return { ...base, kt: null, peak, why: (found as { why: string }).why, history }
    const magnitude = Math.abs(peak.stress)
    const kt = {
      net: magnitude / Math.abs(nominal.net),
      gross: magnitude / Math.abs(nominal.gross),
      error: error / Math.abs(nominal.net),
      flexure: nominal.flexure === null ? null : magnitude / Math.abs(nominal.flexure)
    }
    return { ...base, kt, peak, history }
  })

  const { governing, margin } = govern(raisers)
  const { smallestAngle, worstShape } = checkMesh(plate, mesh)
  const top = raisers.find(({ id }) => id === governing) ?? null
  const free = plate.raisers.flatMap((raiser, r) => (raiser.sharp === null ? boundarySidesOf(plate, mesh, r) : []))
  const governingMagnitude = Math.max(...last.raisers.map((reading) => reading?.magnitude ?? 0))
  return {
    offchart: VERSION,
    case: plateCase.name,
    file,
    settled: unsettled.length === 0,
    governing,
    margin,
    tolerance,
    fixedOrder,
    units,
    raisers,
    checks: {
      balance: solution.balance,
      residual: solution.residual,
      freeEdge: governingMagnitude > 0 ? freeEdgeResidual(solution, free) / governingMagnitude : 0
    },
    mesh: {
      elements,
      triangles: triangleCount(mesh),
      quads: quadCount(mesh),
      order,
      dof: last.dof,
      smallestAngle,
      worstShape
    },
    time,
    warnings: [
      ...sharpWarnings(raisers),
      ...unsettledWarnings(raisers, unsettled.map((r) => plate.raisers[r].id), tolerance),
      ...yieldWarnings(raisers, plateCase.material.yield, units.stress),
      ...eccentricWarnings(raisers),
      ...nearEndWarnings(plate),
      ...elsewhereWarning(solution, top && { id: top.id, ...top.peak! }, units, toStress)
    ]
  }
}

/** The raiser with the largest |peak| (ties by the contract's rule) and by how much it leads the next one. */
function govern(raisers: readonly RaiserVerdict[]): { governing: string | null; margin: number | null } {
  const finite = raisers.filter((raiser) => raiser.peak !== null).map((raiser) => ({ id: raiser.id, ...raiser.peak! }))
  if (finite.length === 0) return { governing: null, margin: null }
  const largest = finite.reduce((a, b) => (Math.abs(b.stress) > Math.abs(a.stress) ? b : a))
  const tie = finite.reduce((widest, { stress, error }) => {
    const apart = Math.abs(largest.stress) - Math.abs(stress)
    return apart <= error + largest.error ? Math.max(widest, apart / Math.abs(largest.stress)) : widest
  }, 0)
  const first = foremost(finite, tie * (1 + 1e-12))
  if (finite.length === 1) return { governing: first.id, margin: null }
  const next = Math.max(...finite.filter(({ id }) => id !== first.id).map(({ stress }) => Math.abs(stress)))
  return { governing: first.id, margin: Math.max(0, Math.abs(first.stress) / next - 1) }
}

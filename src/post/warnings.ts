// The warnings of a verdict: what the numbers do not say by themselves.

import { lengthOf, type Bar, type Plate, type Raiser } from '../case/plate.ts'
import { percent, plainNumber } from './format.ts'
import { foremost, sidePeaks, type EdgePeak } from './peak.ts'
import { boundarySidesOf } from './pass.ts'
import type { RaiserVerdict } from './verdict.ts'
import { whereOnEdge } from './where.ts'
import type { Verdict } from './verdict.ts'
import type { Solution } from '../solve/field.ts'

/** The stress elsewhere must exceed the governing peak by this much, relative, to be worth a word: it may be its own edge's end. */
const WORTH_A_WORD = 0.002

/** Sharp raisers: what governs is named among the finite ones, and must not hide that the stress at these has no bound. */
export function sharpWarnings(raisers: readonly RaiserVerdict[]): string[] {
  const sharp = raisers.filter(({ peak }) => peak === null).map(({ id }) => id)
  if (sharp.length === 0) return []
  return [
    `${sharp.join(', ')}: a sharp re-entrant corner. The elastic stress there has no bound and is above every peak of this table, ` +
      'which covers the other raisers only; give it its real radius.'
  ]
}

/** Raisers whose net section is eccentric while a force runs through it: the plain P/A leaves its bending out. */
export function eccentricWarnings(raisers: readonly RaiserVerdict[]): string[] {
  const eccentric = raisers.filter(({ kt }) => kt !== null && kt.flexure !== null).map(({ id }) => id)
  if (eccentric.length === 0) return []
  return [
    `${eccentric.join(', ')}: the net section is off the line of the load. Kt on the plain nominal carries the bending that this adds; ` +
      'the nominal with that bending, and Kt on it, stand beside it.'
  ]
}

/** A word where the largest edge stress of the plate is on no raiser; a place near a sharp corner does not count. */
export function elsewhereWarning(
  solution: Solution,
  governing: { id: string; stress: number; error: number } | null,
  units: Verdict['units'],
  toUnit: number
): string[] {
  const { plate, mesh } = solution
  if (plate.raisers.length === 0) return []
  const peaks = sidePeaks(solution, boundarySidesOf(plate, mesh, -1)).filter(({ at }) => !nearSharpCorner(plate, at))
  if (peaks.length === 0) return []
  const top: EdgePeak = foremost(peaks, TIE)
  const stress = top.stress * toUnit
  if (governing && Math.abs(stress) <= (Math.abs(governing.stress) + governing.error) * (1 + WORTH_A_WORD)) return []
  const place = whereOnEdge(plate, top.loop, top.edge, top.t, units)
  const compared = governing ? `, above the peak of ${governing.id} (${plainNumber(governing.stress, 4)} ${units.stress})` : ''
  const what = plate.sharpCorners.length > 0 ? 'apart from the sharp corners the largest stress' : 'the largest stress of the plate'
  return [`${what}, ${plainNumber(stress, 4)} ${units.stress}, is at no stress raiser: ${place}${compared}`]
}

/** Edge stresses away from the raisers are this accurate at least; closer ones are equal (the two faces of a bent bar). */
const TIE = 1e-3

/** Within the length of the shorter edge at a sharp corner the singular stress has no bound, so its size says nothing. */
function nearSharpCorner(plate: Plate, [x, y]: readonly [number, number]): boolean {
  return plate.sharpCorners.some(({ at }) => {
    const reach = plate.loops
      .flat()
      .filter(({ curve }) => [curve.from, curve.to].some((end) => end[0] === at[0] && end[1] === at[1]))
      .reduce((shortest, { curve }) => Math.min(shortest, lengthOf(curve)), Infinity)
    return Math.hypot(x - at[0], y - at[1]) < reach
  })
}

/** Raisers nearer to a loaded end than the width of its section: the uniform end traction as drawn is then part of the answer. */
export function nearEndWarnings(plate: Plate): string[] {
  const { bar } = plate
  if (!bar) return []
  const last = bar.sections[bar.sections.length - 1]
  const near = (isNear: (extent: readonly [number, number]) => boolean) =>
    plate.raisers.filter((raiser) => {
      const extent = extentAlong(raiser, bar)
      return extent !== null && isNear(extent)
    })
  const first = bar.sections[0]
  const word = (end: string, raisers: readonly Raiser[]) =>
    raisers.length === 0
      ? []
      : [
          `${raisers.map(({ id }) => id).join(', ')}: nearer to the ${end} end than the width of its section; the result holds for that end ` +
            'as drawn (uniform and linear traction), not for a long bar'
        ]
  return [
    ...word('left', near(([from]) => from - first.x0 < first.width)),
    ...word('right', near(([, to]) => last.x1 - to < last.width))
  ]
}

function extentAlong(raiser: Raiser, { sections }: Bar): [number, number] | null {
  if (raiser.kind === 'hole') return [raiser.box[0], raiser.box[2]]
  if (raiser.kind === 'notch') return [raiser.x, raiser.x]
  if (raiser.kind === 'shoulder') return [sections[raiser.step].x1, sections[raiser.step].x1]
  return null
}

/** Raisers whose peak, or even nominal stress, exceeds the yield stress: there the linear answer ends. */
export function yieldWarnings(raisers: readonly RaiserVerdict[], yieldStress: number | null, unit: string): string[] {
  if (yieldStress === null) return []
  return raisers
    .filter(({ peak }) => peak && Math.abs(peak.stress) > yieldStress)
    .map(
      ({ id, peak, nominal }) =>
        `${id}: the peak is ${plainNumber(Math.abs(peak!.stress) / yieldStress, 3)} times the yield stress of ${plainNumber(yieldStress, 4)} ${unit}: ` +
        'the material yields there, and the real stress is not this linear elastic one' +
        (nominal && Math.abs(nominal.net) > yieldStress ? `; the net nominal stress itself is ${plainNumber(Math.abs(nominal.net) / yieldStress, 3)} times yield` : '')
    )
}

/** Raisers whose bar is wider than the tolerance. */
export function unsettledWarnings(raisers: readonly RaiserVerdict[], unsettled: readonly string[], tolerance: number): string[] {
  return raisers
    .filter(({ id, peak }) => peak && unsettled.includes(id))
    .map(
      ({ id, peak }) =>
        `${id}: not settled to ${percent(tolerance)}; the bar is ${percent(peak!.error / Math.abs(peak!.stress))} of the peak`
    )
}

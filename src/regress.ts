// A case against what it expects: each expectation passes when the found value lies within its band and the error bar
// is narrow enough, a third of the band at most, for that to mean something.

import type { Expectation, PlateCase } from './case/schema.ts'
import { LENGTH_UNITS, STRESS_UNITS } from './case/units.ts'
import { principalStresses, vonMises, type StressState } from './post/principal.ts'
import { stressAtPoint, type Solution } from './solve/field.ts'
import { solvePlate } from './solve/solve.ts'
import type { Verification } from './verify.ts'

/** One expectation and how it went; numbers in the case's units. */
export interface Row {
  /** What was expected of what: "bore Kt net", "xx at 500, 10". */
  readonly what: string
  readonly expected: number
  /** Permitted half-width, relative to `expected`. */
  readonly within: number
  /** Null where there is nothing to compare; `why` then says so. */
  readonly found: number | null
  /** Half-width of the error bar on `found`. */
  readonly error: number | null
  readonly passed: boolean
  /** Why it failed, null when it passed. */
  readonly why: string | null
  readonly source: string
  readonly from: Expectation['from']
}

/** Largest share of the band that the error bar may take up. */
const WIDEST_BAR = 1 / 3

/** Every expectation of a solved case, in the order of the file; none for a case without `expect`. */
export function checkExpectations(verification: Verification, plateCase: PlateCase): Row[] {
  return plateCase.expect.map((expectation) => judge(expectation, findValue(expectation, verification)))
}

/** A value found with the half-width of its bar, or why there is none. */
type Found = { readonly value: number; readonly error: number } | { readonly why: string }

function judge(expectation: Expectation, found: Found): Row {
  const expected = expectedValue(expectation)
  const { within, source, from } = expectation
  const row = { what: subjectOf(expectation), expected, within, source, from }
  if ('why' in found) return { ...row, found: null, error: null, passed: false, why: found.why }
  const band = within * Math.abs(expected)
  const inBand = Math.abs(found.value - expected) <= band
  const isNarrow = found.error <= WIDEST_BAR * band
  const why = !inBand ? 'outside the band' : !isNarrow ? 'its error bar is wider than a third of the band' : null
  return { ...row, found: found.value, error: found.error, passed: why === null, why }
}

function expectedValue(expectation: Expectation): number {
  return (expectation.kt ?? expectation.gross ?? expectation.peak ?? expectation.value)!
}

function subjectOf({ raiser, at, stress, kt, gross }: Expectation): string {
  if (at) return `${stress} at ${at[0]}, ${at[1]}`
  return `${raiser} ${kt !== undefined ? 'Kt net' : gross !== undefined ? 'Kt gross' : 'peak'}`
}

function findValue(expectation: Expectation, verification: Verification): Found {
  if (expectation.at) return findStress(expectation, verification)
  const { raisers } = verification.verdict
  const raiser = raisers.find(({ id }) => id === expectation.raiser)
  if (!raiser) return { why: `no raiser is called ${expectation.raiser}; there are ${raisers.map(({ id }) => id).join(', ') || 'none'}` }
  if (expectation.peak !== undefined) {
    return raiser.peak ? { value: raiser.peak.stress, error: raiser.peak.error } : { why: raiser.why ?? 'it has no finite peak' }
  }
  const { kt } = raiser
  if (!kt) return { why: raiser.why ?? 'it has no Kt' }
  return expectation.kt !== undefined
    ? { value: kt.net, error: kt.error }
    : { value: kt.gross, error: (kt.error * kt.gross) / kt.net }
}

/** Highest order that a stress at a point is looked for at. */
const HIGHEST_ORDER = 8

/**
 * A stress at a point, on the mesh that settled the raisers. Its bar is the largest change against the two orders below, which are
 * those orders' errors more nearly than the last one's; the order rises until the bar is within a third of the band.
 */
function findStress({ at, stress, value: expected, within }: Expectation, { plate, solution, verdict }: Verification): Found {
  const perLength = LENGTH_UNITS[verdict.units.length] / plate.unit.length
  const toStress = plate.unit.stress / STRESS_UNITS[verdict.units.stress]
  const read = (from: Solution) => {
    const state = stressAtPoint(from, at![0] * perLength, at![1] * perLength)
    return state && componentOf(state, stress!) * toStress
  }
  if (read(solution) === null) return { why: 'the point is not in the plate' }
  const first = Math.max(3, solution.order)
  const values = [first - 2, first - 1, first].map((order) => read(solvePlate(plate, solution.mesh, order))!)
  for (let order = first; ; order++) {
    const [twoBelow, oneBelow, value] = values.slice(-3)
    const error = Math.max(Math.abs(value - oneBelow), Math.abs(value - twoBelow))
    if (order >= HIGHEST_ORDER || error <= (within * Math.abs(expected!)) / 3) return { value, error }
    values.push(read(solvePlate(plate, solution.mesh, order + 1))!)
  }
}

function componentOf(state: StressState, component: NonNullable<Expectation['stress']>): number {
  switch (component) {
    case 'xx':
      return state[0]
    case 'yy':
      return state[1]
    case 'xy':
      return state[2]
    case 's1':
      return principalStresses(state)[0]
    case 's2':
      return principalStresses(state)[1]
    case 'vonMises':
      return vonMises(state)
  }
}

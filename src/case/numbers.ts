// The case's lengths in plate units.
// Every input length is divided by the plate's overall size and rounded to a multiple of 2^-40 before any geometry is derived from
// it. Lengths that are decimals, as on a drawing, are first made whole numbers, so that the noise of a conversion is gone before
// the division: the same drawing in any unit system has the same bits. Others come near a rounding edge in a few of 10 000.

import type { Point, Section } from './plate.ts'
import type { PlateCase } from './schema.ts'
import { LENGTH_UNITS } from './units.ts'

/** The case's numbers in plate units. */
export interface PlateNumbers {
  readonly sections: readonly Section[]
  /** One radius a step. */
  readonly fillets: readonly number[]
  readonly holes: readonly { readonly id: string; readonly centre: Point; readonly radius: number }[]
  readonly notches: readonly { readonly id: string; readonly sides: readonly (1 | -1)[]; readonly x: number; readonly depth: number; readonly radius: number; readonly angle: number }[]
  /** Millimetres a plate unit of length. */
  readonly length: number
}

/** Input lengths are rounded to multiples of this many plate units: 1e-12 of the plate, far above the rounding of a conversion. */
const GRID = 2 ** -40

/** Decimal digits that a drawing's largest length may have to be read as a whole number. */
const DIGITS = 12
/** Relative error of a conversion from one unit to another and back, with room: a few roundings of 1.1e-16. */
const CONVERSION = 1e-14

/** The case's lengths in plate units, snapped to the grid. */
export function plateNumbers(plateCase: PlateCase): PlateNumbers {
  const { units, plate } = plateCase
  const toMm = LENGTH_UNITS[units.length]
  const largest = Math.max(...plate.sections.flatMap(({ width, length, offset }) => [width, length, Math.abs(offset)])) * toMm
  const perMm = 10 ** (DIGITS - 1 - decimalExponent(largest))
  const count = (length: number) => {
    const steps = length * toMm * perMm
    const whole = Math.round(steps)
    return Math.abs(steps - whole) <= CONVERSION * Math.abs(steps) ? whole : steps
  }
  const counted = plate.sections.map(({ width, length, offset }) => ({ twiceCentre: 2 * count(offset), width: count(width), length: count(length) }))
  const total = counted.reduce((sum, { length }) => sum + length, 0)
  const twiceTop = Math.max(...counted.map(({ twiceCentre, width }) => twiceCentre + width))
  const twiceBottom = Math.min(...counted.map(({ twiceCentre, width }) => twiceCentre - width))
  const size = Math.max(total, (twiceTop - twiceBottom) / 2)
  const onGrid = (counts: number) => (Math.sign(counts) * Math.round(Math.abs(counts) / size / GRID)) * GRID
  const snap = (length: number) => onGrid(count(length))
  let end = 0
  const sections = counted.map(({ twiceCentre, width, length }) => {
    const x0 = onGrid(end)
    end += length
    // the edges are snapped, not centre and width: sections that are flush on a side are so to the bit
    const top = onGrid((twiceCentre + width) / 2)
    const bottom = onGrid((twiceCentre - width) / 2)
    return { x0, x1: onGrid(end), centre: (top + bottom) / 2, width: top - bottom }
  })
  return {
    sections,
    fillets: plate.sections.slice(1).map((_, i) => snap(plate.fillets[i] ?? 0)),
    holes: plateCase.holes.map(({ id, diameter, at }) => ({ id, radius: snap(diameter) / 2, centre: [snap(at[0]), snap(at[1])] })),
    notches: plateCase.notches.map(({ id, side, x: at, depth, radius, angle }) => ({
      id,
      sides: side === 'both' ? [1, -1] : side === 'top' ? [1] : [-1],
      x: snap(at),
      depth: snap(depth),
      radius: snap(radius),
      angle: (angle * Math.PI) / 180
    })),
    length: size / perMm
  }
}

/** The e in d.ddd 10^e, of a length rounded to the digits that count. */
function decimalExponent(length: number): number {
  const text = length.toExponential(DIGITS - 1)
  return Number(text.slice(text.indexOf('e') + 1))
}

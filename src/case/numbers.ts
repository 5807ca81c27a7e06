// The case's lengths in plate units.
// Every input length is divided by the plate's overall size and rounded to a multiple of 2^-40 before any geometry is derived from
// it: the same plate at any scale and in any unit system has the same bits.

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

/** The case's lengths in plate units, snapped to the grid. */
export function plateNumbers(plateCase: PlateCase): PlateNumbers {
  const { units, plate } = plateCase
  const toMm = LENGTH_UNITS[units.length]
  const total = plate.sections.reduce((sum, { length }) => sum + length, 0)
  const top = Math.max(...plate.sections.map(({ width, offset }) => offset + width / 2))
  const bottom = Math.min(...plate.sections.map(({ width, offset }) => offset - width / 2))
  const size = Math.max(total, top - bottom)
  const snap = (length: number) => Math.round(length / size / GRID) * GRID
  let x = 0
  const sections = plate.sections.map(({ width, length, offset }) => {
    const x0 = x
    x += snap(length)
    return { x0, x1: x, centre: snap(offset), width: snap(width) }
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
    length: size * toMm
  }
}

// From the case to the plate: units to N, mm, MPa, then to plate units; sections, fillets, notches and holes to closed loops.
// Every input length is divided by the plate's overall size and rounded to a multiple of 2^-40 before any geometry is derived from
// it: the same plate at any scale and in any unit system has the same bits.

import { circularArc, type Bar, type Edge, type HoleRaiser, type Loop, type Plate, type Point, type Raiser, type Section } from './plate.ts'
import type { SharpCorner, Traction } from './plate.ts'
import { CaseError } from './problem.ts'
import { NO_LENGTH, sideEdges, type EdgeOfSection, type NotchShape, type StepShape } from './profile.ts'
import type { PlateCase } from './schema.ts'
import { findUnsound } from './sound.ts'
import { placeFindings, sourceOf } from './source.ts'
import { FORCE_UNITS, LENGTH_UNITS } from './units.ts'

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

/**
 * The plate of a case, in plate units.
 * @throws CaseError with every problem of geometry or load, if there is one
 */
export function buildPlate(plateCase: PlateCase): Plate {
  const numbers = plateNumbers(plateCase)
  const source = sourceOf(plateCase)
  const findings = findUnsound(plateCase, numbers)
  if (findings.length > 0) throw new CaseError(source.file, placeFindings(findings, source))
  return assemblePlate(plateCase, numbers)
}

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

/** What one side of the bar sees of sections, steps and notches. */
export function sideOfBar(numbers: PlateNumbers, side: 1 | -1): { sections: EdgeOfSection[]; steps: StepShape[]; notches: NotchShape[] } {
  const word = side > 0 ? 'top' : 'bottom'
  const firstNotch = numbers.holes.length
  const firstShoulder = firstNotch + numbers.notches.length
  const shoulders = shoulderSteps(numbers)
  return {
    sections: numbers.sections.map(({ x0, x1, centre, width }, i) => ({
      x0,
      x1,
      out: side * centre + width / 2,
      label: numbers.sections.length === 1 ? `the ${word} edge` : `the ${word} edge of section ${i + 1}`
    })),
    steps: numbers.fillets.map((radius, i) => {
      const shoulder = shoulders.indexOf(i)
      return { radius, raiser: shoulder < 0 ? -1 : firstShoulder + shoulder, label: `the shoulder between sections ${i + 1} and ${i + 2}` }
    }),
    notches: numbers.notches.flatMap((notch, i) =>
      notch.sides.includes(side) ? [{ ...notch, raiser: firstNotch + i, label: `notch ${notch.id}` }] : []
    )
  }
}

/** Steps (from 0) that have a height on either side, in order: each is a shoulder. */
function shoulderSteps({ sections }: PlateNumbers): number[] {
  return sections.slice(1).flatMap((next, i) => (stepSides(sections[i], next).length > 0 ? [i] : []))
}

/** Sides on which two neighbouring sections differ. */
function stepSides(before: Section, after: Section): (1 | -1)[] {
  const out = ({ centre, width }: Section, side: number) => side * centre + width / 2
  return ([1, -1] as const).filter((side) => Math.abs(out(before, side) - out(after, side)) > NO_LENGTH)
}

/** The bar's outline with free ends, for checks of the geometry. */
export function outlineOf(numbers: PlateNumbers): Loop {
  const free: Traction = () => [0, 0]
  return outerLoop(numbers, free, free, true)
}

function assemblePlate(plateCase: PlateCase, numbers: PlateNumbers): Plate {
  const { sections } = numbers
  const [first, last] = [sections[0], sections[sections.length - 1]]
  const unit = plateUnits(plateCase, numbers)
  // sigma t W = P and so on, with thickness 1, lengths over L and stresses over S
  const axial = unit.force / (unit.thickness * unit.length * unit.stress)
  const moment = unit.moment / (unit.thickness * unit.length ** 2 * unit.stress)
  // the left end carries the moment about its own centre that the offset of the pull adds
  const right = endTraction(last, axial, moment)
  const left = endTraction(first, axial, moment + axial * (last.centre - first.centre))

  const outer = outerLoop(numbers, left, right, true)
  const holes = numbers.holes.map(({ id, centre, radius }, i) => circleLoop(centre, radius, i, `hole ${id}`))
  const loops: Loop[] = [outer, ...holes]
  const raisers = raisersOf(plateCase, numbers)
  const bar: Bar = { sections, blank: outerLoop(numbers, left, right, false), axial, moment }
  return {
    loops,
    raisers,
    sharpCorners: sharpCornersOf(outer),
    bar,
    nu: plateCase.material.nu,
    unit: { length: unit.length, thickness: unit.thickness, stress: unit.stress }
  }
}

/** Force (N), moment (N mm), thickness (mm) and the units of length (mm) and stress (MPa: the largest gross nominal). */
function plateUnits(plateCase: PlateCase, numbers: PlateNumbers) {
  const { units, load, thickness } = plateCase
  const force = load.axial * FORCE_UNITS[units.force]
  const moment = load.moment * FORCE_UNITS[units.force] * LENGTH_UNITS[units.length]
  const t = thickness * LENGTH_UNITS[units.length]
  const stress = Math.max(
    ...numbers.sections.map(({ width }) => {
      const w = width * numbers.length
      return Math.abs(force) / (t * w) + (6 * Math.abs(moment)) / (t * w * w)
    })
  )
  return { force, moment, thickness: t, length: numbers.length, stress }
}

/** Uniform plus linear traction on an end, normal to it: N / W + 12 M (y - centre) / W^3; positive M pulls the top. */
function endTraction({ centre, width }: Section, axial: number, moment: number): Traction {
  const uniform = axial / width
  const slope = (12 * moment) / width ** 3
  return ([, y], [nx]) => [nx * (uniform + slope * (y - centre)), 0]
}

function outerLoop(numbers: PlateNumbers, left: Traction, right: Traction, withNotches: boolean): Loop {
  const chain = (side: 1 | -1): Edge[] => {
    const { sections, steps, notches } = sideOfBar(numbers, side)
    return sideEdges(side, sections, steps, withNotches ? notches : [])
  }
  const lower = chain(-1)
  const upper = chain(1)
  const end = (from: Point, to: Point, traction: Traction, label: string): Edge => ({
    curve: { kind: 'line', from, to },
    raiser: -1,
    part: 'end',
    side: 0,
    origin: 0,
    traction,
    label
  })
  return [
    ...lower,
    end(lower[lower.length - 1].curve.to, upper[0].curve.from, right, 'the right end'),
    ...upper,
    end(upper[upper.length - 1].curve.to, lower[0].curve.from, left, 'the left end')
  ]
}

/** A circular hole: four quarter arcs, clockwise from angle 0. */
function circleLoop(centre: Point, radius: number, raiser: number, label: string): Loop {
  const [x, y] = centre
  const corner: Point[] = [[x + radius, y], [x, y - radius], [x - radius, y], [x, y + radius]]
  return corner.map((from, i) => ({
    curve: circularArc(centre, radius, (-i * Math.PI) / 2, -Math.PI / 2, { from, to: corner[(i + 1) % 4] }),
    raiser,
    part: 'hole',
    side: 0,
    origin: 0,
    traction: null,
    label
  }))
}

function raisersOf(plateCase: PlateCase, numbers: PlateNumbers): Raiser[] {
  const holes = numbers.holes.map(({ id, centre: [x, y], radius }, i): HoleRaiser => ({
    id,
    kind: 'hole',
    sharp: null,
    loop: i + 1,
    box: [x - radius, y - radius, x + radius, y + radius],
    shape: plateCase.holes[i].shape
  }))
  const notches = numbers.notches.map(({ id, x, depth, radius, sides }): Raiser => ({ id, kind: 'notch', sharp: null, x, depth, radius, sides }))
  const shoulders = shoulderSteps(numbers).map((step, i): Raiser => {
    const radius = numbers.fillets[step]
    const sharp = radius === 0 ? 'a sharp re-entrant corner (fillet radius 0): the elastic stress there has no bound, so there is no finite Kt' : null
    return { id: `shoulder-${i + 1}`, kind: 'shoulder', sharp, step, radius, sides: stepSides(numbers.sections[step], numbers.sections[step + 1]) }
  })
  return [...holes, ...notches, ...shoulders]
}

/** Re-entrant corners of the outer loop: where it turns clockwise by more than the angle that still counts as tangent. */
function sharpCornersOf(loop: Loop): SharpCorner[] {
  return loop.flatMap((after, i) => {
    const before = loop[(i + loop.length - 1) % loop.length]
    if (before.curve.kind !== 'line' || after.curve.kind !== 'line') return []
    const [ax, ay] = [before.curve.to[0] - before.curve.from[0], before.curve.to[1] - before.curve.from[1]]
    const [bx, by] = [after.curve.to[0] - after.curve.from[0], after.curve.to[1] - after.curve.from[1]]
    const turn = Math.atan2(ax * by - ay * bx, ax * bx + ay * by)
    if (turn > -TANGENT_ANGLE) return []
    return [{ at: after.curve.from, angle: Math.PI - turn, raiser: Math.max(before.raiser, after.raiser) }]
  })
}

/** Edges that meet within a degree of a common tangent are tangent. */
const TANGENT_ANGLE = Math.PI / 180


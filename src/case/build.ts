// From the case to the plate: its numbers in plate units, the bar's outline, the holes, the tractions of its load.

import { outerLoop, shoulderSteps, stepSides } from './bar.ts'
import { plateNumbers, type PlateNumbers } from './numbers.ts'
import { circularArc, type Bar, type HoleRaiser, type Loop, type Plate, type Point, type Raiser, type Section } from './plate.ts'
import type { SharpCorner, Traction } from './plate.ts'
import { CaseError } from './problem.ts'
import type { PlateCase } from './schema.ts'
import { findUnsound } from './sound.ts'
import { placeFindings, sourceOf } from './source.ts'
import { FORCE_UNITS, LENGTH_UNITS } from './units.ts'

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


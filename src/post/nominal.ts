// Nominal stress at a stress raiser: the bar is cut across its axis there and the end load is put on what is left.
// Net: the section without the raiser; axial P/A, moment M y/I about the net centroid at the raiser's own edge (for a
// central hole 12 M r/(t (W^3 - d^3)), for opposite notches and shoulders 6 M/(t d^2)): W.D. Pilkey, D.F. Pilkey,
// Peterson's Stress Concentration Factors, 3rd ed. (2008), section 1.2 and the charts' definitions.
// Gross: the full local width at its outer fibre. Flexure: net, with the bending that an eccentric section adds.

import type { Bar, HoleRaiser, NotchRaiser, Plate, Section, ShoulderRaiser } from '../case/plate.ts'
import { cutLoop, sectionProperties, subtractCut, type Cut, type SectionProperties } from './section.ts'
import type { ForceUnit, LengthUnit, Nominal, Verdict } from './verdict.ts'
import { plainNumber } from './format.ts'
import { FORCE_UNITS, LENGTH_UNITS, STRESS_UNITS } from '../case/units.ts'

type Units = Verdict['units']

/** A nominal stress smaller than this part of the gross one is no basis for a factor. */
const LEAST_PART_OF_GROSS = 1e-3

/** Closer than this, relative, two stresses or positions count as equal: rounding of the section's arithmetic. */
const SAME = 1e-9

/** Force and length whose quotient force / length² is the stress unit: what a formula's numbers are written in. */
const FORMULA_UNITS: Record<Units['stress'], { force: ForceUnit; length: LengthUnit }> = {
  Pa: { force: 'N', length: 'm' },
  MPa: { force: 'N', length: 'mm' },
  GPa: { force: 'kN', length: 'mm' },
  psi: { force: 'lbf', length: 'in' },
  ksi: { force: 'kip', length: 'in' }
}

/** What the load acts on at one raiser; heights y in plate units. */
interface RaiserSections {
  readonly net: Cut
  readonly gross: Cut
  /** Where the raiser's own edges meet the net section. */
  readonly ownEdges: readonly number[]
}

/**
 * Nominal stresses of raiser `raiser` (index into `plate.raisers`) in the case's stress unit, tension positive,
 * or the reason why it has none. `how` is the formula of the net one with its numbers, in the force and length units
 * that make up the case's stress unit (N and mm for MPa, lbf and in for psi).
 */
export function nominalStress(plate: Plate, raiser: number, units: Units): Nominal | { why: string } {
  const { bar } = plate
  const subject = plate.raisers[raiser]
  if (!bar || subject.kind === 'corner') {
    return { why: 'no nominal stress: only a bar loaded at its ends has a section to take it from' }
  }
  const sections = raiserSections(plate, bar, subject)
  const net = sectionProperties(sections.net)
  const gross = sectionProperties(sections.gross)
  if (!(net.area > 0)) return { why: 'no nominal stress: nothing is left of the section at this place' }

  const { axial, moment } = bar
  const own = largestOn(sections.ownEdges, net, axial, moment)
  const outer = largestOn(extent(sections.gross), gross, axial, moment)
  if (!(Math.abs(own.stress) >= LEAST_PART_OF_GROSS * Math.abs(outer.stress)) || own.stress === 0) {
    return { why: 'no nominal stress: at the edge of this raiser it is below a thousandth of the gross one' }
  }

  const last = bar.sections[bar.sections.length - 1]
  const eccentricity = last.centre - net.centroid
  const isEccentric = axial !== 0 && Math.abs(eccentricity) > SAME * net.area
  const bent = largestOn(sections.ownEdges, net, axial, moment + axial * eccentricity).stress
  const hasFlexure = isEccentric && Math.abs(bent) >= LEAST_PART_OF_GROSS * Math.abs(outer.stress)

  const stress = plate.unit.stress / STRESS_UNITS[units.stress]
  return {
    net: own.stress * stress,
    gross: outer.stress * stress,
    flexure: hasFlexure ? bent * stress : null,
    how: formulaOf(plate, bar, subject, sections, own.y, units)
  }
}

/** N/A + M (y - centroid)/I at the edge where it is largest in magnitude; a tie goes to tension, then to the larger y. */
function largestOn(edges: readonly number[], properties: SectionProperties, axial: number, moment: number) {
  const { area, centroid, inertia } = properties
  const candidates = edges.map((y) => ({ y, stress: axial / area + (moment * (y - centroid)) / inertia }))
  const largest = Math.max(...candidates.map(({ stress }) => Math.abs(stress)))
  return candidates
    .filter(({ stress }) => Math.abs(stress) >= largest * (1 - SAME))
    .sort((a, b) => Math.sign(b.stress) - Math.sign(a.stress) || b.y - a.y)[0]
}

function raiserSections(plate: Plate, bar: Bar, subject: HoleRaiser | NotchRaiser | ShoulderRaiser): RaiserSections {
  if (subject.kind === 'shoulder') return shoulderSections(bar, subject)
  const x = subject.kind === 'hole' ? (subject.box[0] + subject.box[2]) / 2 : subject.x
  const side = narrowSide(bar.sections, x)
  const gross = cutLoop(bar.blank, x, side)
  // the outer loop has the notches in it; every hole but this one loses what the line crosses of it
  let net = cutLoop(plate.loops[0], x, side)
  for (let loop = 1; loop < plate.loops.length; loop++) {
    if (subject.kind !== 'hole' || loop !== subject.loop) net = subtractCut(net, cutLoop(plate.loops[loop], x, side))
  }
  if (subject.kind === 'hole') {
    const [, low, , high] = subject.box
    return { net: subtractCut(net, [[low, high]]), gross, ownEdges: [high, low] }
  }
  const [bottom, top] = extent(cutLoop(plate.loops[0], x, side))
  return { net, gross, ownEdges: subject.sides.map((s) => (s > 0 ? top : bottom)) }
}

/** Net: the narrow section's width, gross: the wide section's, nothing taken out of either. */
function shoulderSections(bar: Bar, { step, sides }: ShoulderRaiser): RaiserSections {
  const left = bar.sections[step]
  const right = bar.sections[step + 1]
  const [narrow, wide] = left.width < right.width * (1 - SAME) ? [left, right] : [right, left]
  const inner = (side: 1 | -1) => side * Math.min(side * edgeOf(left, side), side * edgeOf(right, side))
  return {
    net: [[edgeOf(narrow, -1), edgeOf(narrow, 1)]],
    gross: [[edgeOf(wide, -1), edgeOf(wide, 1)]],
    ownEdges: sides.map(inner)
  }
}

function edgeOf(section: Section, side: 1 | -1): number {
  return section.centre + (side * section.width) / 2
}

/** The side from which a cut at x is taken: at a step that of the narrow section, elsewhere it makes no difference. */
function narrowSide(sections: readonly Section[], x: number): 1 | -1 {
  for (let k = 0; k + 1 < sections.length; k++) {
    if (Math.abs(sections[k].x1 - x) <= SAME && sections[k].width < sections[k + 1].width) return -1
  }
  return 1
}

/** Lowest and highest y of a cut. */
function extent(cut: Cut): [low: number, high: number] {
  return [cut[0][0], cut[cut.length - 1][1]]
}

/** Symbols that the sign and the numbers of a formula are put together from. */
interface Term {
  readonly symbols: string
  readonly numbers: string
}

/**
 * "P / (t (W − d)) = 24000 / (8 × 44)", "6 M / (t d²) = 6 × 200000 / (5 × 40²)" and so on: the shortest form that is
 * exactly the section's P/A + M y/I at the height `y`.
 */
function formulaOf(
  plate: Plate,
  bar: Bar,
  subject: HoleRaiser | NotchRaiser | ShoulderRaiser,
  { net, gross }: RaiserSections,
  y: number,
  units: Units
): string {
  const { force, length } = FORMULA_UNITS[units.stress]
  const scale = plate.unit.length / LENGTH_UNITS[length]
  const pull = (plate.unit.stress * plate.unit.length * plate.unit.thickness) / FORCE_UNITS[force]
  const section: FormulaSection = {
    thickness: plate.unit.thickness / LENGTH_UNITS[length],
    net: net.map(([low, high]) => [low * scale, high * scale]),
    gross: gross.map(([low, high]) => [low * scale, high * scale]),
    hole: subject.kind === 'hole' ? [subject.box[1] * scale, subject.box[3] * scale] : null,
    isCircle: subject.kind === 'hole' && subject.shape === 'circle'
  }
  const terms: Term[] = []
  if (bar.axial !== 0) terms.push(axialTerm(section, bar.axial * pull))
  if (bar.moment !== 0) terms.push(bendingTerm(section, bar.moment * pull * scale, y * scale))
  const join = (part: keyof Term) => terms.map((term) => term[part]).join(' + ').replace('+ −', '− ')
  return `${join('symbols')} = ${join('numbers')}`
}

interface FormulaSection {
  readonly thickness: number
  readonly net: Cut
  readonly gross: Cut
  /** Lowest and highest y of the hole that the nominal is for. */
  readonly hole: readonly [number, number] | null
  readonly isCircle: boolean
}

/** True when the section is the full width with nothing but the raiser's own hole, well inside it, taken out. */
function isHoleAlone({ net, gross, hole }: FormulaSection): boolean {
  return hole !== null && gross.length === 1 && net.length === 2 &&
    net[0][0] === gross[0][0] && net[0][1] === hole[0] && net[1][0] === hole[1] && net[1][1] === gross[0][1]
}

function axialTerm(section: FormulaSection, force: number): Term {
  const t = plainNumber(section.thickness)
  const numbers = `${plainNumber(force)} / (${t} × ${plainNumber(sectionProperties(section.net).area)})`
  if (isHoleAlone(section)) return { symbols: `P / (t (W − ${section.isCircle ? 'd' : 'h'}))`, numbers }
  return { symbols: section.net.length === 1 ? 'P / (t d)' : 'P / (t w)', numbers }
}

function bendingTerm(section: FormulaSection, moment: number, y: number): Term {
  const { net, gross, hole } = section
  const { centroid, inertia, area } = sectionProperties(net)
  const t = plainNumber(section.thickness)
  const sign = y < centroid ? '−' : ''
  const m = inProduct(moment)
  if (net.length === 1 && (y === net[0][0] || y === net[0][1])) {
    return { symbols: `${sign}6 M / (t d²)`, numbers: `${sign}6 × ${m} / (${t} × ${plainNumber(area)}²)` }
  }
  if (hole && isHoleAlone(section) && Math.abs(hole[0] + hole[1] - gross[0][0] - gross[0][1]) <= SAME * area) {
    const height = hole[1] - hole[0]
    const cubes = `${t} × (${plainNumber(gross[0][1] - gross[0][0])}³ − ${plainNumber(height)}³)`
    return section.isCircle
      ? { symbols: `${sign}12 M r / (t (W³ − d³))`, numbers: `${sign}12 × ${m} × ${plainNumber(height / 2)} / (${cubes})` }
      : { symbols: `${sign}6 M h / (t (W³ − h³))`, numbers: `${sign}6 × ${m} × ${plainNumber(height)} / (${cubes})` }
  }
  const lever = inProduct(y - centroid)
  return { symbols: 'M y / I', numbers: `${plainNumber(moment)} × ${lever} / ${plainNumber(section.thickness * inertia)}` }
}

/** A number as a factor: a negative one in brackets. */
function inProduct(value: number): string {
  return value < 0 ? `(${plainNumber(value)})` : plainNumber(value)
}

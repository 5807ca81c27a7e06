// What cannot be, found before any mesh: features outside the plate or over one another, fillets and notches that do not fit,
// ligaments too thin to be solved.

import { outlineOf, shoulderSteps, sideOfBar } from './bar.ts'
import { gapBetween, isInside, nearestOn } from './nearest.ts'
import type { PlateNumbers } from './numbers.ts'
import { lengthOf, type Curve, type Edge, type Loop, type Point } from './plate.ts'
import { freeStretches, mouthHalfWidth, NO_LENGTH } from './profile.ts'
import type { PlateCase } from './schema.ts'
import type { Finding } from './source.ts'
import { LENGTH_UNITS } from './units.ts'

/** Thinnest ligament that is taken, as a share of the size of the smaller feature beside it. */
const THINNEST = 0.01

/** Smallest length that is taken, as a share of the plate's size: lengths are known to 1e-12 of it, so to six digits at least. */
const SMALLEST = 1e-6

/** Shortest edge that is taken, as a share of the plate's size: the mesh grades down to it, and not much further. */
const SHORTEST = 1e-7

/** Everything that is unsound in a case's geometry. */
export function findUnsound(plateCase: PlateCase, numbers: PlateNumbers): Finding[] {
  const small = findTooSmall(plateCase, numbers)
  if (small.length > 0) return small
  // what stands on an unsound outline cannot be judged
  const bar = findBarProblems(plateCase, numbers)
  if (bar.length > 0) return bar
  const notches = findNotchProblems(plateCase, numbers)
  if (notches.length > 0) return notches
  const outline = outlineOf(numbers)
  const slivers = findSlivers(plateCase, numbers, outline)
  if (slivers.length > 0) return slivers
  return [...findThinNotches(plateCase, numbers, outline), ...findHoleProblems(plateCase, numbers, outline)]
}

/** Lengths of plate units in words. */
function lengthWords(plateCase: PlateCase, numbers: PlateNumbers): (length: number) => string {
  const unit = plateCase.units.length
  const perPlateUnit = numbers.length / LENGTH_UNITS[unit]
  return (length) => `${Number((length * perPlateUnit).toPrecision(5))} ${unit}`
}

/** Lengths that vanish beside the plate: they would be rounded away, and divided by. */
function findTooSmall(plateCase: PlateCase, numbers: PlateNumbers): Finding[] {
  const { plate, holes, notches, units } = plateCase
  const least = lengthWords(plateCase, numbers)(SMALLEST)
  const lengths: { path: Finding['path']; length: number; given: number }[] = [
    ...numbers.sections.flatMap(({ x0, x1, width }, i) => [
      { path: ['plate', 'sections', i, 'width'], length: width, given: plate.sections[i].width },
      { path: ['plate', 'sections', i, 'length'], length: x1 - x0, given: plate.sections[i].length }
    ]),
    ...numbers.fillets.map((length, i) => ({ path: ['plate', 'fillets', i], length, given: plate.fillets[i] ?? 0 })),
    ...numbers.holes.map(({ radius }, i) => ({ path: ['holes', i, 'diameter'], length: 2 * radius, given: holes[i].diameter })),
    ...numbers.notches.flatMap(({ depth, radius }, i) => [
      { path: ['notches', i, 'depth'], length: depth, given: notches[i].depth },
      { path: ['notches', i, 'radius'], length: radius, given: notches[i].radius }
    ])
  ]
  // a fillet radius of 0 is a sharp step, and meant
  return lengths.flatMap(({ path, length, given }) =>
    given === 0 || length >= SMALLEST
      ? []
      : [{ code: 'too-small', path, message: `expected a length of at least ${least} (a millionth of the plate's size), got ${given} ${units.length}` }]
  )
}

function findBarProblems(plateCase: PlateCase, numbers: PlateNumbers): Finding[] {
  const words = lengthWords(plateCase, numbers)
  const { sections } = numbers
  const findings: Finding[] = []
  sections.slice(1).forEach((after, i) => {
    const before = sections[i]
    const top = Math.min(before.centre + before.width / 2, after.centre + after.width / 2)
    const bottom = Math.max(before.centre - before.width / 2, after.centre - after.width / 2)
    const least = THINNEST * Math.min(before.width, after.width)
    if (top - bottom < least) {
      const got = top - bottom > 0 ? `an overlap of ${words(top - bottom)}` : `a gap of ${words(bottom - top)}`
      findings.push({
        code: 'apart',
        path: ['plate', 'sections', i + 1, 'offset'],
        message: `expected sections ${i + 1} and ${i + 2} to overlap by at least ${words(least)} where they meet, got ${got}`
      })
    }
  })
  if (findings.length > 0) return findings
  for (const side of [1, -1] as const) {
    const own = sideOfBar(numbers, side)
    freeStretches(own.sections, own.steps).forEach(({ x0, x1 }, i) => {
      if (x1 - x0 >= -NO_LENGTH) return
      const { x0: start, x1: end } = own.sections[i]
      const step = i > 0 && x0 - start > NO_LENGTH ? i - 1 : i
      findings.push({
        code: 'fillet-too-large',
        path: ['plate', 'fillets', step],
        message: `expected fillets that fit into the ${words(end - start)} of section ${i + 1} (${side > 0 ? 'top' : 'bottom'} edge), got fillets that take ${words(end - start - (x1 - x0))} of it`
      })
    })
  }
  return findings
}

/** Notches that are too deep for the plate, off their straight edge, or over one another on one side. */
function findNotchProblems(plateCase: PlateCase, numbers: PlateNumbers): Finding[] {
  const words = lengthWords(plateCase, numbers)
  const findings: Finding[] = []
  numbers.notches.forEach((notch, n) => {
    const at = numbers.sections.findIndex(({ x0, x1 }) => notch.x >= x0 && notch.x < x1)
    if (at < 0) {
      const end = numbers.sections[numbers.sections.length - 1].x1
      findings.push({ code: 'outside', path: ['notches', n, 'x'], message: `expected a place on the bar, 0 to ${words(end)}, got ${words(notch.x)}` })
      return
    }
    const room = numbers.sections[at].width / notch.sides.length
    if (notch.depth >= room) {
      const half = notch.sides.length === 2 ? 'half the width' : 'the width'
      findings.push({ code: 'too-deep', path: ['notches', n, 'depth'], message: `expected a depth below ${half} of section ${at + 1} (${words(room)}), got ${words(notch.depth)}` })
      return
    }
    for (const side of notch.sides) {
      const own = sideOfBar(numbers, side)
      const { x0, x1 } = freeStretches(own.sections, own.steps)[at]
      const shape = own.notches.find(({ label, x }) => label === `notch ${notch.id}` && x === notch.x)!
      const half = mouthHalfWidth(shape)
      if (notch.x - half > x0 && notch.x + half < x1) continue
      findings.push({
        code: 'off-edge',
        path: ['notches', n, 'x'],
        message: `expected the mouth (${words(2 * half)} wide) on the straight ${side > 0 ? 'top' : 'bottom'} edge of section ${at + 1}, from ${words(x0)} to ${words(x1)}, got ${words(notch.x - half)} to ${words(notch.x + half)}`
      })
      break
    }
  })
  if (findings.length > 0) return findings
  for (const side of [1, -1] as const) {
    const mouths = sideOfBar(numbers, side)
      .notches.map((notch) => ({ ...notch, half: mouthHalfWidth(notch), index: notch.raiser - numbers.holes.length }))
      .toSorted((a, b) => a.x - b.x)
    mouths.slice(1).forEach((next, i) => {
      const before = mouths[i]
      const least = THINNEST * Math.min(before.depth, next.depth)
      const gap = next.x - next.half - (before.x + before.half)
      if (gap >= least) return
      findings.push({
        code: 'overlap',
        path: ['notches', next.index],
        message: `expected a gap of at least ${words(least)} to ${before.label} at the ${side > 0 ? 'top' : 'bottom'} edge, got ${gapWords(gap, words)}`
      })
    })
  }
  return findings
}

/** Edges that are left over by a hair, such as the face above a fillet that is all but as large as its step. */
function findSlivers(plateCase: PlateCase, numbers: PlateNumbers, outline: Loop): Finding[] {
  const words = lengthWords(plateCase, numbers)
  const [firstNotch, steps] = [numbers.holes.length, shoulderSteps(numbers)]
  const firstShoulder = firstNotch + numbers.notches.length
  const pathOf = ({ raiser, curve: { from } }: Edge): Finding['path'] => {
    if (raiser >= firstShoulder) return ['plate', 'fillets', steps[raiser - firstShoulder]]
    if (raiser >= firstNotch) return ['notches', raiser - firstNotch]
    return ['plate', 'sections', Math.max(0, numbers.sections.findLastIndex(({ x0 }) => from[0] >= x0))]
  }
  return outline.flatMap((edge): Finding[] => {
    const length = lengthOf(edge.curve)
    if (length >= SHORTEST) return []
    const what = edge.part === 'side' ? edge.label : `a ${edge.part} of ${edge.label}`
    return [{ code: 'sliver', path: pathOf(edge), message: `expected edges of at least ${words(SHORTEST)} (or none), got ${words(length)} of ${what}` }]
  })
}

function gapWords(gap: number, words: (length: number) => string): string {
  return gap > NO_LENGTH ? words(gap) : gap < -NO_LENGTH ? `an overlap of ${words(-gap)}` : 'none'
}

/** Notches whose root comes too near to what lies across the bar: the other edge, its notches and fillets. */
function findThinNotches(plateCase: PlateCase, numbers: PlateNumbers, outline: Loop): Finding[] {
  const words = lengthWords(plateCase, numbers)
  return numbers.notches.flatMap((notch, n): Finding[] => {
    const own = outline.filter(({ raiser }) => raiser === numbers.holes.length + n)
    const found = thinnest(own, (a, b) => b.side !== a.side, outline)
    const least = THINNEST * notch.depth
    if (!found || found.gap >= least) return []
    return [{ code: 'thin', path: ['notches', n], message: `expected a ligament of at least ${words(least)} (1 % of the notch's depth) to ${found.label}, got ${gapWords(found.gap, words)}` }]
  })
}

/** The smallest gap between edges of one feature and those edges of the outline that `faces` lets through. */
function thinnest(own: readonly Edge[], faces: (own: Edge, other: Edge) => boolean, outline: Loop): { gap: number; label: string } | null {
  let best: { gap: number; label: string } | null = null
  for (const edge of own) {
    for (const other of outline) {
      if (!faces(edge, other) || (best && boxGap(edge.curve, other.curve) >= best.gap)) continue
      const { gap } = gapBetween(edge.curve, other.curve)
      if (!best || gap < best.gap) best = { gap, label: other.label }
    }
  }
  return best
}

/** What the gap between two curves is at least: that of their boxes. */
function boxGap(a: Curve, b: Curve): number {
  // an arc of at most a quarter circle bulges by less than half its chord
  const spare = (lengthOf(a) + lengthOf(b)) / 2
  const apart = (axis: 0 | 1) => Math.max(Math.min(a.from[axis], a.to[axis]) - Math.max(b.from[axis], b.to[axis]), Math.min(b.from[axis], b.to[axis]) - Math.max(a.from[axis], a.to[axis]))
  return Math.max(apart(0), apart(1)) - spare
}

function findHoleProblems(plateCase: PlateCase, numbers: PlateNumbers, outline: Loop): Finding[] {
  const words = lengthWords(plateCase, numbers)
  const findings: Finding[] = []
  const { holes } = numbers
  holes.forEach(({ centre, radius }, h) => {
    if (!isInside(outline, centre)) {
      findings.push({ code: 'outside', path: ['holes', h, 'at'], message: `expected a centre inside the plate, got ${pointWords(plateCase, h)}` })
      return
    }
    const least = THINNEST * 2 * radius
    const nearest = outline.reduce(
      (best, edge) => {
        const [x, y] = nearestOn(edge.curve, centre[0], centre[1]).at
        const gap = Math.hypot(x - centre[0], y - centre[1])
        return gap < best.gap ? { gap, label: edge.label } : best
      },
      { gap: Infinity, label: '' }
    )
    const gap = nearest.gap - radius
    if (gap < least) {
      findings.push({ code: gap > 0 ? 'thin' : 'overlap', path: ['holes', h], message: `expected a ligament of at least ${words(least)} (1 % of the diameter) to ${nearest.label}, got ${gapWords(gap, words)}` })
    }
    for (let other = 0; other < h; other++) {
      const apart = Math.hypot(centre[0] - holes[other].centre[0], centre[1] - holes[other].centre[1])
      const between = apart - radius - holes[other].radius
      const wanted = THINNEST * 2 * Math.min(radius, holes[other].radius)
      if (between >= wanted) continue
      findings.push({
        code: between > 0 ? 'thin' : 'overlap',
        path: ['holes', h],
        message: `expected a gap of at least ${words(wanted)} to hole ${holes[other].id}, got ${gapWords(between, words)} (centres ${words(apart)} apart)`
      })
    }
  })
  return findings
}

function pointWords({ holes, units }: PlateCase, hole: number): string {
  const [x, y]: Point = holes[hole].at
  return `[${x}, ${y}] ${units.length}`
}

// What cannot be, found before any mesh: features outside the plate or over one another, fillets and notches that do not fit,
// ligaments too thin to be solved.

import { outlineOf, shoulderSteps, sideOfBar } from './bar.ts'
import { boxOf, gapBetween, gapOfBoxes, isInside, nearestOn, type Box } from './nearest.ts'
import type { PlateNumbers } from './numbers.ts'
import { lengthOf, type Edge, type Loop, type Point } from './plate.ts'
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
function lengthWords(plateCase: PlateCase, numbers: PlateNumbers, digits = 5): (length: number) => string {
  const unit = plateCase.units.length
  const perPlateUnit = numbers.length / LENGTH_UNITS[unit]
  return (length) => `${Number((length * perPlateUnit).toPrecision(digits))} ${unit}`
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
  return onePerPlace(findings)
}

/** Notches that are too deep for the plate, off their straight edge, or over one another on one side. */
function findNotchProblems(plateCase: PlateCase, numbers: PlateNumbers): Finding[] {
  const words = lengthWords(plateCase, numbers)
  const findings: Finding[] = []
  const free = ([1, -1] as const).map((side) => {
    const { sections: edges, steps } = sideOfBar(numbers, side)
    return { side, stretches: freeStretches(edges, steps) }
  })
  numbers.notches.forEach((notch, n) => {
    const at = numbers.sections.findIndex(({ x0, x1 }) => notch.x >= x0 && notch.x < x1)
    if (at < 0) {
      const end = numbers.sections[numbers.sections.length - 1].x1
      findings.push({ code: 'outside', path: ['notches', n, 'x'], message: `expected a place on the bar, 0 to ${words(end)}, got ${words(notch.x)}` })
      return
    }
    const room = numbers.sections[at].width / notch.sides.length
    if (notch.depth >= room) {
      const share = notch.sides.length === 2 ? 'half the width' : 'the width'
      findings.push({ code: 'too-deep', path: ['notches', n, 'depth'], message: `expected a depth below ${share} of section ${at + 1} (${words(room)}), got ${words(notch.depth)}` })
      return
    }
    const half = mouthHalfWidth(notch)
    for (const { side, stretches } of free) {
      const { x0, x1 } = stretches[at]
      if (!notch.sides.includes(side)) continue
      const gap = Math.min(notch.x - half - x0, x1 - notch.x - half)
      const least = THINNEST * notch.depth
      if (gap >= least) continue
      if (gap > NO_LENGTH) {
        const message = `expected a gap of at least ${words(least)} (1 % of the notch's depth) beside the mouth on the straight ${side > 0 ? 'top' : 'bottom'} edge of section ${at + 1}, got ${words(gap)}`
        findings.push({ code: 'thin', path: ['notches', n], message })
        break
      }
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
  // so short a length is known to no more digits
  const words = lengthWords(plateCase, numbers, 2)
  const [firstNotch, steps] = [numbers.holes.length, shoulderSteps(numbers)]
  const firstShoulder = firstNotch + numbers.notches.length
  const pathOf = ({ raiser, curve: { from } }: Edge): Finding['path'] => {
    if (raiser >= firstShoulder) return ['plate', 'fillets', steps[raiser - firstShoulder]]
    if (raiser >= firstNotch) return ['notches', raiser - firstNotch]
    return ['plate', 'sections', Math.max(0, numbers.sections.findLastIndex(({ x0 }) => from[0] >= x0))]
  }
  const found = outline.flatMap((edge): Finding[] => {
    const length = lengthOf(edge.curve)
    if (length >= SHORTEST) return []
    const what = edge.part === 'side' ? edge.label : `a ${edge.part} of ${edge.label}`
    return [{ code: 'sliver', path: pathOf(edge), message: `expected edges of at least ${words(SHORTEST)} (or none), got ${words(length)} of ${what}` }]
  })
  return onePerPlace(found)
}

/** The first finding of each place: what is wrong on the upper side mostly is so on the lower side too. */
function onePerPlace(findings: readonly Finding[]): Finding[] {
  const places = new Set<string>()
  return findings.filter(({ path }) => {
    const place = path.join('.')
    return !places.has(place) && places.add(place)
  })
}

function gapWords(gap: number, words: (length: number) => string): string {
  return gap > NO_LENGTH ? words(gap) : gap < -NO_LENGTH ? `an overlap of ${words(-gap)}` : 'none'
}

/** Notches whose root comes too near to what lies across the bar: the other edge, its notches and fillets. */
function findThinNotches(plateCase: PlateCase, numbers: PlateNumbers, outline: Loop): Finding[] {
  const words = lengthWords(plateCase, numbers)
  const boxed = outline.map((edge) => ({ edge, box: boxOf(edge.curve) }))
  return numbers.notches.flatMap((notch, n): Finding[] => {
    const own = boxed.filter(({ edge }) => edge.raiser === numbers.holes.length + n)
    const least = THINNEST * notch.depth
    const found = thinnest(own, boxed, least)
    if (!found) return []
    return [{ code: 'thin', path: ['notches', n], message: `expected a ligament of at least ${words(least)} (1 % of the notch's depth) to ${found.label}, got ${gapWords(found.gap, words)}` }]
  })
}

interface BoxedEdge {
  readonly edge: Edge
  readonly box: Box
}

/** The smallest gap below `least` between a notch's edges and what lies across the bar from each of them, null where there is none. */
function thinnest(own: readonly BoxedEdge[], outline: readonly BoxedEdge[], least: number): { gap: number; label: string } | null {
  let best: { gap: number; label: string } | null = null
  let limit = least
  for (const { edge, box } of own) {
    for (const other of outline) {
      if (other.edge.side === edge.side || gapOfBoxes(box, other.box) >= limit) continue
      const { gap } = gapBetween(edge.curve, other.edge.curve)
      if (gap < limit) [best, limit] = [{ gap, label: other.edge.label }, gap]
    }
  }
  return best
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
      // one is enough to move it
      break
    }
  })
  return findings
}

function pointWords({ holes, units }: PlateCase, hole: number): string {
  const [x, y]: Point = holes[hole].at
  return `[${x}, ${y}] ${units.length}`
}

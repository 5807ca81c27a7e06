// Sections across the bar: where a vertical line cuts a closed loop of lines and arcs, exactly, and the section's
// area, centroid and second moment. A cut is a list of intervals [y0, y1], ascending and apart, in plate units;
// thickness is 1.

import { pointOn, type Arc, type Loop, type Point } from '../case/plate.ts'

/** Stretches of y, ascending and apart; two numbers each, plate lengths. */
export type Cut = readonly (readonly [low: number, high: number])[]

/** Area (length, thickness 1), centroid and second moment of area about the centroid (length cubed). */
export interface SectionProperties {
  readonly area: number
  readonly centroid: number
  readonly inertia: number
}

/** x this close to the line counts as on it, in plate lengths (the plate's size is about 1): rounding of sums of lengths. */
const ON_LINE = 1e-11

/**
 * What the line at x, moved by an infinitesimal step to `side` (+1 right, -1 left), cuts out of a loop's inside.
 * A face that stands on the line is thereby seen from that side, and a line that only touches cuts nothing.
 */
export function cutLoop(loop: Loop, x: number, side: 1 | -1): Cut {
  const isLeft = (px: number) => (side > 0 ? px <= x + ON_LINE : px < x - ON_LINE)
  const crossings: number[] = []
  for (const { curve } of loop) {
    const pieces = curve.kind === 'line' ? [0, 1] : turningPoints(curve)
    for (let k = 0; k + 1 < pieces.length; k++) {
      const from = pointOn(curve, pieces[k])
      const to = pointOn(curve, pieces[k + 1])
      // x runs one way between the two, so they stand on different sides exactly when the piece crosses once
      if (isLeft(from[0]) === isLeft(to[0])) continue
      if (Math.abs(from[0] - x) <= ON_LINE) crossings.push(from[1])
      else if (Math.abs(to[0] - x) <= ON_LINE) crossings.push(to[1])
      else if (curve.kind === 'line') crossings.push(from[1] + ((x - from[0]) / (to[0] - from[0])) * (to[1] - from[1]))
      else crossings.push(arcAtX(curve, x, pieces[k], pieces[k + 1])[1])
    }
  }
  crossings.sort((a, b) => a - b)
  const section: [number, number][] = []
  for (let k = 0; k + 1 < crossings.length; k += 2) {
    if (crossings[k + 1] > crossings[k]) section.push([crossings[k], crossings[k + 1]])
  }
  return section
}

/** `section` without the stretches of `taken`. */
export function subtractCut(section: Cut, taken: Cut): Cut {
  let rest: Cut = section
  for (const [low, high] of taken) {
    rest = rest.flatMap(([a, b]): [number, number][] => [[a, Math.min(b, low)], [Math.max(a, high), b]])
      .filter(([a, b]) => b > a)
  }
  return rest
}

/**
 * A = sum of lengths, centroid = integral of y / A, I = integral of (y - centroid)^2.
 * An empty section has area 0, centroid 0, inertia 0.
 */
export function sectionProperties(section: Cut): SectionProperties {
  let area = 0
  let first = 0
  for (const [low, high] of section) {
    area += high - low
    first += ((high - low) * (low + high)) / 2
  }
  const centroid = area > 0 ? first / area : 0
  let inertia = 0
  for (const [low, high] of section) {
    const width = high - low
    inertia += width ** 3 / 12 + width * ((low + high) / 2 - centroid) ** 2
  }
  return { area, centroid, inertia }
}

// x(phi) = cx + reach cos(phi + lead) on an arc: a cos phi cos(tilt) - b sin phi sin(tilt)
function horizontalSwing(arc: Arc): { reach: number; lead: number } {
  const u = arc.axes[0] * Math.cos(arc.tilt)
  const v = arc.axes[1] * Math.sin(arc.tilt)
  return { reach: Math.hypot(u, v), lead: Math.atan2(v, u) }
}

/** Parameters 0, the arc's leftmost and rightmost points in between, 1: x runs one way from each to the next. */
function turningPoints(arc: Arc): number[] {
  const { lead } = horizontalSwing(arc)
  const low = Math.min(arc.start, arc.start + arc.sweep) + lead
  const high = Math.max(arc.start, arc.start + arc.sweep) + lead
  const inner: number[] = []
  for (let k = Math.ceil(low / Math.PI); k * Math.PI <= high; k++) {
    const t = (k * Math.PI - lead - arc.start) / arc.sweep
    if (t > 0 && t < 1) inner.push(t)
  }
  return [0, ...inner.sort((a, b) => a - b), 1]
}

/** The point with abscissa x on the arc between parameters t0 and t1, where x runs one way and crosses the line. */
function arcAtX(arc: Arc, x: number, t0: number, t1: number): Point {
  const { reach, lead } = horizontalSwing(arc)
  const opening = Math.acos(Math.max(-1, Math.min(1, (x - arc.centre[0]) / reach)))
  // cos falls from 0 to pi and rises from pi to 2 pi: the half-turn that the piece lies in picks the branch
  const half = Math.floor((arc.start + ((t0 + t1) / 2) * arc.sweep + lead) / Math.PI)
  const turned = half % 2 === 0 ? half * Math.PI + opening : (half + 1) * Math.PI - opening
  return pointOn(arc, Math.max(t0, Math.min(t1, (turned - lead - arc.start) / arc.sweep)))
}

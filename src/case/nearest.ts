// Distances between points and curves: closed forms for lines and circles, sampling with refinement for ellipses.

import { derivativeOn, lengthOf, pointOn } from './plate.ts'
import type { Arc, Curve, Loop, Point } from './plate.ts'

/** A point on a curve: parameter t and place. */
export interface OnCurve {
  readonly t: number
  readonly at: Point
}

/** The point of a curve nearest to (x, y). */
export function nearestOn(curve: Curve, x: number, y: number): OnCurve {
  if (curve.kind === 'line') {
    const [dx, dy] = derivativeOn(curve, 0)
    const along = ((x - curve.from[0]) * dx + (y - curve.from[1]) * dy) / (dx * dx + dy * dy)
    return onCurve(curve, Math.min(1, Math.max(0, along)))
  }
  return curve.axes[0] === curve.axes[1] ? nearestOnCircle(curve, x, y) : nearestOnEllipse(curve, x, y)
}

function onCurve(curve: Curve, t: number): OnCurve {
  return { t, at: pointOn(curve, t) }
}

function nearestOnCircle(curve: Arc, x: number, y: number): OnCurve {
  const t = parameterOf(curve, Math.atan2(y - curve.centre[1], x - curve.centre[0]) - curve.tilt)
  if (t !== null) return onCurve(curve, t)
  const { from, to } = curve
  return onCurve(curve, Math.hypot(from[0] - x, from[1] - y) <= Math.hypot(to[0] - x, to[1] - y) ? 0 : 1)
}

/** Parameter at which an arc passes its own angle phi, null where it does not. */
function parameterOf(curve: Arc, phi: number): number | null {
  const turn = 2 * Math.PI
  const ahead = ((((phi - curve.start) * Math.sign(curve.sweep)) % turn) + turn) % turn
  const sweep = Math.abs(curve.sweep)
  return ahead <= sweep ? ahead / sweep : null
}

function nearestOnEllipse(curve: Arc, x: number, y: number): OnCurve {
  let best = 0
  let least = Infinity
  let [from, to] = [0, 1]
  for (let width = 1 / 32; width > 1e-12; width /= 16) {
    for (let t = from; t <= to + width / 2; t += width) {
      const [px, py] = pointOn(curve, Math.min(t, 1))
      const distance = Math.hypot(px - x, py - y)
      if (distance < least) [least, best] = [distance, Math.min(t, 1)]
    }
    from = Math.max(0, best - width)
    to = Math.min(1, best + width)
  }
  return onCurve(curve, best)
}

/** The shortest distance between two curves (0 where they cross or touch) and where it is taken. */
export function gapBetween(a: Curve, b: Curve): { readonly gap: number; readonly a: Point; readonly b: Point } {
  let best = { gap: Infinity, a: a.from, b: b.from }
  const consider = (onA: Point, onB: Point): void => {
    const gap = Math.hypot(onA[0] - onB[0], onA[1] - onB[1])
    if (gap < best.gap) best = { gap, a: onA, b: onB }
  }
  for (const end of [a.from, a.to]) consider(end, nearestOn(b, end[0], end[1]).at)
  for (const end of [b.from, b.to]) consider(nearestOn(a, end[0], end[1]).at, end)
  for (const crossing of crossings(a, b)) return { gap: 0, a: crossing, b: crossing }
  // inner extremes: the common normal passes through the centre of every circle that takes part
  if (a.kind === 'arc') {
    for (const at of throughCentre(a, b)) consider(at, nearestOn(b, at[0], at[1]).at)
  }
  if (b.kind === 'arc') {
    for (const at of throughCentre(b, a)) consider(nearestOn(a, at[0], at[1]).at, at)
  }
  return best
}

/** A box [x0, y0, x1, y1] that holds a curve. */
export type Box = readonly [x0: number, y0: number, x1: number, y1: number]

/** A box around a line or an arc of at most a quarter circle, not the tightest one. */
export function boxOf(curve: Curve): Box {
  const { from, to } = curve
  // such an arc bulges beyond its ends by less than half its length
  const bulge = curve.kind === 'line' ? 0 : lengthOf(curve) / 2
  return [Math.min(from[0], to[0]) - bulge, Math.min(from[1], to[1]) - bulge, Math.max(from[0], to[0]) + bulge, Math.max(from[1], to[1]) + bulge]
}

/** At most the gap between what two boxes hold; negative where they overlap. */
export function gapOfBoxes(a: Box, b: Box): number {
  return Math.max(a[0] - b[2], b[0] - a[2], a[1] - b[3], b[1] - a[3])
}

/** Points of arc `a` on the normal that it shares with `b`: for circles exact, else by alternating projection. */
function throughCentre(a: Arc, b: Curve): Point[] {
  const towards = b.kind === 'arc' ? [b.centre] : [footOf(b, a.centre)]
  const circular = a.axes[0] === a.axes[1] && (b.kind === 'line' || b.axes[0] === b.axes[1])
  if (circular) {
    return towards.flatMap(([x, y]) => {
      const phi = Math.atan2(y - a.centre[1], x - a.centre[0]) - a.tilt
      return [phi, phi + Math.PI].flatMap((angle) => {
        const t = parameterOf(a, angle)
        return t === null ? [] : [pointOn(a, t)]
      })
    })
  }
  return [0.125, 0.375, 0.625, 0.875].map((start) => {
    let at = pointOn(a, start)
    for (let step = 0; step < 60; step++) {
      const onB = nearestOn(b, at[0], at[1]).at
      at = nearestOn(a, onB[0], onB[1]).at
    }
    return at
  })
}

/** Foot of the perpendicular from a point to the (endless) line. */
function footOf(line: Curve, [x, y]: Point): Point {
  const [dx, dy] = derivativeOn(line, 0)
  const t = ((x - line.from[0]) * dx + (y - line.from[1]) * dy) / (dx * dx + dy * dy)
  return [line.from[0] + t * dx, line.from[1] + t * dy]
}

/** Where two curves cross: lines and circles in closed form; ellipses by the sign of the other curve's side between samples. */
function crossings(a: Curve, b: Curve): Point[] {
  if (a.kind === 'line' && b.kind === 'line') return lineWithLine(a, b)
  if (a.kind === 'line' && b.kind === 'arc') return lineWithArc(a, b)
  if (a.kind === 'arc' && b.kind === 'line') return lineWithArc(b, a)
  return a.kind === 'arc' && b.kind === 'arc' ? arcWithArc(a, b) : []
}

function lineWithLine(a: Curve, b: Curve): Point[] {
  const [ax, ay] = derivativeOn(a, 0)
  const [bx, by] = derivativeOn(b, 0)
  const cross = ax * by - ay * bx
  if (cross === 0) return []
  const [wx, wy] = [b.from[0] - a.from[0], b.from[1] - a.from[1]]
  const t = (wx * by - wy * bx) / cross
  const u = (wx * ay - wy * ax) / cross
  return t >= 0 && t <= 1 && u >= 0 && u <= 1 ? [pointOn(a, t)] : []
}

/** In the arc's own frame, scaled to a unit circle, a line stays a line. */
function lineWithArc(line: Curve, arc: Arc): Point[] {
  const [px, py] = toUnit(arc, line.from)
  const [qx, qy] = toUnit(arc, line.to)
  const [dx, dy] = [qx - px, qy - py]
  const [a, b, c] = [dx * dx + dy * dy, px * dx + py * dy, px * px + py * py - 1]
  const root = b * b - a * c
  if (root < 0) return []
  return [(-b - Math.sqrt(root)) / a, (-b + Math.sqrt(root)) / a].flatMap((t) => {
    if (t < 0 || t > 1) return []
    return parameterOf(arc, Math.atan2(py + t * dy, px + t * dx)) === null ? [] : [pointOn(line, t)]
  })
}

function toUnit({ centre, axes, tilt }: Arc, [x, y]: Point): Point {
  const [c, s] = [Math.cos(tilt), Math.sin(tilt)]
  const [dx, dy] = [x - centre[0], y - centre[1]]
  return [(c * dx + s * dy) / axes[0], (c * dy - s * dx) / axes[1]]
}

/** Two arcs cross where one of them, followed closely, changes sides of the other's ellipse within that arc's sweep. */
function arcWithArc(a: Arc, b: Arc): Point[] {
  const side = (t: number) => {
    const [u, v] = toUnit(b, pointOn(a, t))
    return u * u + v * v - 1
  }
  const samples = 64
  for (let i = 0; i < samples; i++) {
    let [t0, t1] = [i / samples, (i + 1) / samples]
    const sign = Math.sign(side(t0))
    if (sign === Math.sign(side(t1))) continue
    for (let step = 0; step < 50; step++) {
      const t = (t0 + t1) / 2
      if (Math.sign(side(t)) === sign) t0 = t
      else t1 = t
    }
    const at = pointOn(a, t0)
    const [u, v] = toUnit(b, at)
    if (parameterOf(b, Math.atan2(v, u)) !== null) return [at]
  }
  return []
}

/** True when a point lies inside a loop: an odd number of edges on the way out. The ray's slope meets no drawing's edges end on. */
export function isInside(loop: Loop, point: Point): boolean {
  // an arc of at most a quarter circle bulges by less than its chord
  const reach = 3 * Math.max(...loop.map(({ curve: { from } }) => Math.abs(from[0] - point[0]) + Math.abs(from[1] - point[1])))
  const ray: Curve = { kind: 'line', from: point, to: [point[0] + 0.91751 * reach, point[1] + 0.39777 * reach] }
  const count = loop.reduce((sum, { curve }) => sum + crossings(ray, curve).length, 0)
  return count % 2 === 1
}

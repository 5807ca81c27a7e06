// The plate as exact geometry: closed loops of lines and arcs, each edge with its raiser and its traction.
// Lengths are in plate units (the plate's overall size is about 1, `unit.length` mm each), stresses in plate
// units of `unit.stress` MPa, thickness is 1, E is 1. x right, y up; the outer loop runs counter-clockwise and
// holes clockwise, so the material lies on the left of every edge.

/** A point or vector (x, y). */
export type Point = readonly [x: number, y: number]

/** A straight edge. */
export interface Line {
  readonly kind: 'line'
  readonly from: Point
  readonly to: Point
}

/**
 * An arc of a circle or ellipse: centre + R(tilt) (a cos phi, b sin phi), phi = start + sweep t, 0 <= t <= 1.
 * `sweep` > 0 runs counter-clockwise. `from` and `to` are its ends, bit for bit those of its neighbours.
 */
export interface Arc {
  readonly kind: 'arc'
  readonly from: Point
  readonly to: Point
  readonly centre: Point
  /** Semi-axes along the local x and y; equal for a circle. */
  readonly axes: Point
  /** Angle of the local x axis, radians. */
  readonly tilt: number
  readonly start: number
  readonly sweep: number
}

export type Curve = Line | Arc

/** Stress vector (plate stress units) on an edge at a point with outward unit normal; positive pulls. */
export type Traction = (point: Point, normal: Point) => Point

/** What an edge is, in a drawing's words. */
export type Part = 'hole' | 'root' | 'flank' | 'fillet' | 'face' | 'side' | 'end'

export interface Edge {
  readonly curve: Curve
  /** Index into `Plate.raisers`, -1 for an edge of no raiser. */
  readonly raiser: number
  readonly part: Part
  /** Which side of the bar: +1 upper, -1 lower, 0 neither (holes, ends). */
  readonly side: -1 | 0 | 1
  /** Parameter t from which an arc's angle is counted in words: a fillet's narrow end, a notch's root. */
  readonly origin: number
  /** Null on a free edge. */
  readonly traction: Traction | null
  /** For messages: "the right end", "the top edge of section 2", "hole relief". */
  readonly label: string
}

/** A closed chain: edge i + 1 starts, bit for bit, where edge i ends. */
export type Loop = readonly Edge[]

interface RaiserBase {
  readonly id: string
  /** Why it has no finite Kt (a sharp re-entrant corner), else null. */
  readonly sharp: string | null
}

/** A hole; `loop` is its index in `Plate.loops`, `box` its extent [x0, y0, x1, y1]. */
export interface HoleRaiser extends RaiserBase {
  readonly kind: 'hole'
  readonly loop: number
  readonly box: readonly [number, number, number, number]
  readonly shape: 'circle' | 'ellipse' | 'slot' | 'rectangle' | 'outline'
}

/** A notch, or two opposite ones as one raiser; root at `x`, `depth` below the edge. */
export interface NotchRaiser extends RaiserBase {
  readonly kind: 'notch'
  readonly x: number
  readonly depth: number
  readonly radius: number
  readonly sides: readonly (1 | -1)[]
}

/** A step between sections `step` and `step + 1` (from 0); `sides` are those that have a re-entrant step. */
export interface ShoulderRaiser extends RaiserBase {
  readonly kind: 'shoulder'
  readonly step: number
  readonly radius: number
  readonly sides: readonly (1 | -1)[]
}

/** A rounded re-entrant corner of a free outline. */
export interface CornerRaiser extends RaiserBase {
  readonly kind: 'corner'
}

export type Raiser = HoleRaiser | NotchRaiser | ShoulderRaiser | CornerRaiser

/** One section of a bar: from x0 to x1, centred on y = centre. */
export interface Section {
  readonly x0: number
  readonly x1: number
  readonly centre: number
  readonly width: number
}

/** A bar of sections and its end load: N in plate stress times length (thickness 1), M in stress times length squared. */
export interface Bar {
  readonly sections: readonly Section[]
  /** The outer loop with its fillets but without notches: what gross sections are cut from. */
  readonly blank: Loop
  readonly axial: number
  readonly moment: number
}

/** A re-entrant corner with no radius: the stress there has no bound. */
export interface SharpCorner {
  readonly at: Point
  /** Angle of the material, radians, above pi. */
  readonly angle: number
  /** The raiser that it belongs to, -1 for none. */
  readonly raiser: number
}

export interface Plate {
  /** loops[0] is the outer one. */
  readonly loops: readonly Loop[]
  readonly raisers: readonly Raiser[]
  readonly sharpCorners: readonly SharpCorner[]
  readonly bar: Bar | null
  readonly nu: number
  /** What a plate unit is: length and thickness in mm, stress in MPa. */
  readonly unit: { readonly length: number; readonly thickness: number; readonly stress: number }
}

/** The point at parameter t in [0, 1]; exactly `from` at 0 and `to` at 1. */
export function pointOn(curve: Curve, t: number): Point {
  if (t === 0) return curve.from
  if (t === 1) return curve.to
  if (curve.kind === 'line') {
    return [curve.from[0] + t * (curve.to[0] - curve.from[0]), curve.from[1] + t * (curve.to[1] - curve.from[1])]
  }
  const phi = curve.start + t * curve.sweep
  const u = curve.axes[0] * Math.cos(phi)
  const v = curve.axes[1] * Math.sin(phi)
  const c = Math.cos(curve.tilt)
  const s = Math.sin(curve.tilt)
  return [curve.centre[0] + c * u - s * v, curve.centre[1] + s * u + c * v]
}

/** d(point)/dt at parameter t, plate length a unit of t. */
export function derivativeOn(curve: Curve, t: number): Point {
  if (curve.kind === 'line') return [curve.to[0] - curve.from[0], curve.to[1] - curve.from[1]]
  const phi = curve.start + t * curve.sweep
  const u = -curve.axes[0] * Math.sin(phi) * curve.sweep
  const v = curve.axes[1] * Math.cos(phi) * curve.sweep
  const c = Math.cos(curve.tilt)
  const s = Math.sin(curve.tilt)
  return [c * u - s * v, s * u + c * v]
}

/** Outward unit normal (away from the material) at parameter t. */
export function outwardNormal(curve: Curve, t: number): Point {
  const [dx, dy] = derivativeOn(curve, t)
  const length = Math.hypot(dx, dy)
  return [dy / length, -dx / length]
}

/** Radius of curvature at parameter t, Infinity on a line: (a^2 sin^2 + b^2 cos^2)^(3/2) / (a b). */
export function radiusOfCurvature(curve: Curve, t: number): number {
  if (curve.kind === 'line') return Infinity
  const phi = curve.start + t * curve.sweep
  const [a, b] = curve.axes
  const speed = Math.hypot(a * Math.sin(phi), b * Math.cos(phi))
  return speed ** 3 / (a * b)
}

/** A circular arc from angle `start` over `sweep` (radians, > 0 counter-clockwise); ends are computed unless given. */
export function circularArc(
  centre: Point,
  radius: number,
  start: number,
  sweep: number,
  ends?: { from: Point; to: Point }
): Arc {
  const at = (phi: number): Point => [centre[0] + radius * Math.cos(phi), centre[1] + radius * Math.sin(phi)]
  return {
    kind: 'arc',
    from: ends ? ends.from : at(start),
    to: ends ? ends.to : at(start + sweep),
    centre,
    axes: [radius, radius],
    tilt: 0,
    start,
    sweep
  }
}

/** Length of a curve: exact for lines and circles, Gauss-Legendre with 16 spans for ellipses. */
export function lengthOf(curve: Curve): number {
  if (curve.kind === 'line') return Math.hypot(curve.to[0] - curve.from[0], curve.to[1] - curve.from[1])
  if (curve.axes[0] === curve.axes[1]) return curve.axes[0] * Math.abs(curve.sweep)
  let length = 0
  for (let span = 0; span < 16; span++) {
    for (const [node, weight] of [[-Math.sqrt(0.6), 5 / 18], [0, 8 / 18], [Math.sqrt(0.6), 5 / 18]] as const) {
      const [dx, dy] = derivativeOn(curve, (span + 0.5 + 0.5 * node) / 16)
      length += (weight * Math.hypot(dx, dy)) / 16
    }
  }
  return length
}

/** Area enclosed by a loop, positive when it runs counter-clockwise: half the closed integral of x dy - y dx, exact. */
export function areaOf(loop: Loop): number {
  let twice = 0
  for (const { curve } of loop) {
    const [x0, y0] = curve.from
    const [x1, y1] = curve.to
    if (curve.kind === 'line') {
      twice += x0 * y1 - x1 * y0
      continue
    }
    // about its centre an arc sweeps a b sweep; the centre adds the chord's cross product
    const [cx, cy] = curve.centre
    twice += curve.axes[0] * curve.axes[1] * curve.sweep + cx * (y1 - y0) - cy * (x1 - x0)
  }
  return twice / 2
}

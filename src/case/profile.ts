// One long side of a bar as a chain of edges: straight edges of the sections, steps with their fillets, notches.
// It is built for the lower side, going along +x with the material above, in a frame where `depth` points into the material and
// y = -outward; the upper side is the same chain mirrored and reversed. Plate units.

import { circularArc, type Curve, type Edge, type Part, type Point } from './plate.ts'

/** A section as this side sees it: its edge runs from x0 to x1 at `out` outward of the axis. */
export interface EdgeOfSection {
  readonly x0: number
  readonly x1: number
  readonly out: number
  /** "the top edge of section 2". */
  readonly label: string
}

/** A notch in this side. */
export interface NotchShape {
  readonly x: number
  readonly depth: number
  readonly radius: number
  /** Included angle of the flanks, radians. */
  readonly angle: number
  readonly raiser: number
  readonly label: string
}

/** Radius and raiser of the step between two sections. */
export interface StepShape {
  readonly radius: number
  readonly raiser: number
  readonly label: string
}

/** Lengths below this are no length (plate units): sums of inputs on a grid of 2^-40 differ by less only when they are equal. */
export const NO_LENGTH = 1e-11

/** An edge before it is put on its side: its curve and the words of it. */
interface Piece {
  readonly curve: Curve
  readonly part: Part
  readonly raiser: number
  readonly origin: number
  readonly label: string
}

/** Straight stretch of a section's edge that its steps leave: what a notch may stand on. */
export interface FreeStretch {
  readonly x0: number
  readonly x1: number
}

/** Length that the fillet of a step of height H takes of the narrow section: r for a quarter circle, else a = sqrt(H (2r - H)). */
export function filletLength(radius: number, height: number): number {
  return radius <= height + NO_LENGTH ? radius : Math.sqrt(height * (2 * radius - height))
}

/** The stretches of each section's edge between its fillets. */
export function freeStretches(sections: readonly EdgeOfSection[], steps: readonly StepShape[]): FreeStretch[] {
  return sections.map((section, i) => {
    const take = (step: StepShape | undefined, other: EdgeOfSection | undefined) => {
      const height = step && other ? other.out - section.out : 0
      return step && height > NO_LENGTH ? filletLength(step.radius, height) : 0
    }
    return {
      x0: section.x0 + take(steps[i - 1], sections[i - 1]),
      x1: section.x1 - take(steps[i], sections[i + 1])
    }
  })
}

/** Half the width of a notch at its mouth. */
export function mouthHalfWidth({ depth, radius, angle }: Pick<NotchShape, 'depth' | 'radius' | 'angle'>): number {
  const half = angle / 2
  const rise = depth - radius * (1 - Math.sin(half))
  // without a flank the mouth is cut by the circle itself
  if (rise <= NO_LENGTH) return Math.sqrt(depth * (2 * radius - depth))
  return radius * Math.cos(half) + rise * Math.tan(half)
}

/**
 * Edges of one side of the bar, in the sense of the outer loop (lower side +x, upper side -x). `side` +1 upper, -1 lower.
 */
export function sideEdges(
  side: 1 | -1,
  sections: readonly EdgeOfSection[],
  steps: readonly StepShape[],
  notches: readonly NotchShape[]
): Edge[] {
  const pieces: Piece[] = []
  let at: Point = [sections[0].x0, -sections[0].out]
  const add = (made: readonly Piece[]): void => {
    for (const piece of made) {
      pieces.push(piece)
      at = piece.curve.to
    }
  }
  const straightTo = (x: number, label: string): void => {
    if (x - at[0] > NO_LENGTH) add([{ curve: { kind: 'line', from: at, to: [x, at[1]] }, part: 'side', raiser: -1, origin: 0, label }])
  }
  sections.forEach((section, i) => {
    const own = notches.filter(({ x }) => x >= section.x0 && x < section.x1).toSorted((a, b) => a.x - b.x)
    for (const notch of own) {
      straightTo(notch.x - mouthHalfWidth(notch), section.label)
      add(notchPieces(notch, at))
    }
    const next = sections[i + 1]
    if (!next) {
      straightTo(section.x1, section.label)
      return
    }
    const height = section.out - next.out
    if (Math.abs(height) <= NO_LENGTH) {
      // flush: the two edges are one straight line, divided where the section changes
      straightTo(section.x1, section.label)
      return
    }
    const taken = height < 0 ? filletLength(steps[i].radius, -height) : 0
    straightTo(section.x1 - taken, section.label)
    const far: Point = [section.x1, -next.out]
    add(height > 0 ? stepIn(at, far, steps[i]) : stepOut(at, far, steps[i]))
  })
  return side < 0 ? pieces.map((piece) => edgeOf(piece, -1)) : pieces.map((piece) => edgeOf(mirrored(piece), 1)).toReversed()
}

function edgeOf({ curve, part, raiser, origin, label }: Piece, side: 1 | -1): Edge {
  return { curve, part, raiser, side, origin, traction: null, label }
}

/** From the wide section's corner `at` inwards: face, then fillet. `far` is the sharp corner that the fillet rounds. */
function stepIn(at: Point, far: Point, { radius, raiser, label }: StepShape): Piece[] {
  const [x, inner] = far
  const height = inner - at[1]
  const base = { raiser, origin: 1, label }
  if (radius === 0) return [{ ...base, part: 'face', curve: { kind: 'line', from: at, to: far } }]
  const taken = filletLength(radius, height)
  const to: Point = [x + taken, inner]
  const centre: Point = [x + taken, inner - radius]
  // the arc ends at the top of its circle, on the narrow edge; it starts on the face or, larger than the step, at the corner
  const face = height - radius
  if (face <= NO_LENGTH) {
    const start = face < -NO_LENGTH ? Math.atan2(at[1] - centre[1], -taken) : Math.PI
    return [{ ...base, part: 'fillet', curve: circularArc(centre, radius, start, Math.PI / 2 - start, { from: at, to }) }]
  }
  const tangent: Point = [x, inner - radius]
  return [
    { ...base, part: 'face', curve: { kind: 'line', from: at, to: tangent } },
    { ...base, part: 'fillet', curve: circularArc(centre, radius, Math.PI, -Math.PI / 2, { from: tangent, to }) }
  ]
}

/** From the narrow section at `at` outwards to the wide section's corner `far`: stepIn in a mirror. */
function stepOut(at: Point, far: Point, step: StepShape): Piece[] {
  const pieces = stepIn([-far[0], far[1]], [-far[0], at[1]], step).map(flipped).toReversed()
  // the first point is computed anew in the mirror: keep the chain's own
  return [{ ...pieces[0], curve: { ...pieces[0].curve, from: at } }, ...pieces.slice(1)]
}

/** Mirror image in x = 0, run through backwards. */
function flipped({ curve, origin, ...rest }: Piece): Piece {
  const turn = ([x, y]: Point): Point => [-x, y]
  return { ...rest, origin: 1 - origin, curve: reflect(curve, turn, (phi) => Math.PI - phi) }
}

/** Mirror image in y = 0, run through backwards. */
function mirrored({ curve, origin, ...rest }: Piece): Piece {
  const turn = ([x, y]: Point): Point => [x, -y]
  return { ...rest, origin: 1 - origin, curve: reflect(curve, turn, (phi) => -phi) }
}

/** A reflected curve (of circles, untilted) in the opposite sense. */
function reflect(curve: Curve, turn: (point: Point) => Point, angle: (phi: number) => number): Curve {
  const from = turn(curve.to)
  const to = turn(curve.from)
  if (curve.kind === 'line') return { kind: 'line', from, to }
  return { ...curve, from, to, centre: turn(curve.centre), start: angle(curve.start + curve.sweep), sweep: curve.sweep }
}

/** Flank, two halves of the root arc, flank; or the two halves alone where there is no flank. */
function notchPieces(notch: NotchShape, at: Point): Piece[] {
  const { x, depth, radius, angle, raiser, label } = notch
  const half = angle / 2
  const edge = at[1]
  const centre: Point = [x, edge + depth - radius]
  const root: Point = [x, edge + depth]
  const end: Point = [x + (x - at[0]), edge]
  const base = { raiser, label }
  const arc = (start: number, sweep: number, from: Point, to: Point, origin: number): Piece => ({
    ...base,
    part: 'root',
    origin,
    curve: circularArc(centre, radius, start, sweep, { from, to })
  })
  const rise = depth - radius * (1 - Math.sin(half))
  if (rise <= NO_LENGTH) {
    // a centre a rounding above the edge is on it: a semicircle
    const start = Math.atan2(Math.max(0, edge - centre[1]), at[0] - x)
    const sweep = Math.PI / 2 - start
    return [arc(start, sweep, at, root, 1), arc(Math.PI / 2, sweep, root, end, 0)]
  }
  // each flank touches the root arc at `half` above its horizontal radius
  const reach = radius * Math.cos(half)
  const height = centre[1] + radius * Math.sin(half)
  const left: Point = [x - reach, height]
  const right: Point = [x + reach, height]
  const sweep = half - Math.PI / 2
  return [
    { ...base, part: 'flank', origin: 0, curve: { kind: 'line', from: at, to: left } },
    arc(Math.PI / 2 - sweep, sweep, left, root, 1),
    arc(Math.PI / 2, sweep, root, right, 0),
    { ...base, part: 'flank', origin: 1, curve: { kind: 'line', from: right, to: end } }
  ]
}

// How large an element may be, and where: the smallest over all sources of (size + growth * distance to the source), so sizes at
// two places differ by at most the growth times their distance (halved as often as all sizes are). Sources sit on the boundary: on
// arcs (curvature), at tangent points where the curvature jumps, at corners, and wherever the gap across the material to another
// edge is small. Lengths in plate units. Cost: about n log n for n edges, log n a query.

import Flatbush from 'flatbush'
import { boxOf, nearestOn } from '../case/nearest.ts'
import { derivativeOn, lengthOf, outwardNormal, pointOn, radiusOfCurvature } from '../case/plate.ts'
import type { Arc, Curve, Edge, Plate, Point, Raiser } from '../case/plate.ts'
import { leastOver, type Source } from './source-tree.ts'

/** Element size wanted at (x, y). */
export type SizeField = (x: number, y: number) => number

/** How fine a mesh is asked for. */
export interface Fineness {
  /** Halvings asked for at each raiser, by index in `Plate.raisers`. */
  readonly raiser: readonly number[]
  /** Halvings of all sizes, everywhere; -1 doubles them. */
  readonly all: number
}

/** Element sides on an arc turn by about this angle at most (30 degrees): the stress along a hole's edge varies like cos 2 theta. */
const ARC_ANGLE = Math.PI / 6
/** Size at a tangent point of an arc and a line, in radii: the stress is continuous there, its slope is not. */
const TANGENT = 0.09
/** Size at the ends of a raiser's edge (a notch's mouth, the upper end of a large fillet, a short face), in lengths of the shorter edge. */
const CORNER = 0.35
/** Size at a sharp re-entrant corner, in lengths of its shorter edge: the singular field must not spoil its surroundings. */
const SHARP = 1e-3
/**
 * Size on a notch's root or a fillet, at most, in the depths of the feature: it matters where the depth is less than a quarter of the
 * radius. Measured for depth over radius 0.2 and 0.05 at order 6: errors 5e-7 and 1e-6 (2000, 3900 unknowns), without it 6e-6 and 8e-6
 * (2300, 2700); at order 4 it divides both errors by 3 and by 10. At 0.5 curvature alone limits the size: 3e-5 (2100).
 */
const SHALLOW = 2
/** Size in a gap between two edges, in widths of the gap. */
const GAP = 1
/** Growth of the size with the distance from a source. */
const GROWTH = 0.75
/** Samples along an edge that look across the material for gaps. */
const SAMPLES = 16

/** The size field of a plate at a fineness. */
export function sizeField(plate: Plate, fineness: Fineness): SizeField {
  const sources = [...arcSources(plate, fineness), ...joinSources(plate, fineness)]
  const gaps = gapSources(plate, fineness, leastOver(sources, GROWTH))
  const least = leastOver([...sources, ...gaps], GROWTH)
  const scale = 2 ** -fineness.all
  return (x, y) => scale * least(x, y)
}

/** 2 to the minus halvings for what belongs to a raiser (or to none: -1). */
function scaleFor({ raiser }: Fineness, index: number): number {
  return index < 0 ? 1 : 2 ** -raiser[index]
}

/** Sources along every arc: a length that turns by ARC_ANGLE, or the whole arc where that is shorter. */
function arcSources(plate: Plate, fineness: Fineness): Source[] {
  const sources: Source[] = []
  for (const { curve, raiser } of plate.loops.flat()) {
    if (curve.kind === 'line') continue
    const steps = 2 * Math.ceil(Math.abs(curve.sweep) / ARC_ANGLE)
    const shallow = SHALLOW * depthOf(curve, plate.raisers[raiser])
    for (let i = 0; i <= steps; i++) {
      const [x, y] = pointOn(curve, i / steps)
      const size = Math.min(radiusOfCurvature(curve, i / steps) * ARC_ANGLE, lengthOf(curve), shallow)
      sources.push({ x, y, size: size * scaleFor(fineness, raiser) })
    }
  }
  return sources
}

/** Depth of the feature that an arc belongs to: of a notch; of a fillet its height over the edge that it is tangent to. */
function depthOf(arc: Arc, raiser: Raiser | undefined): number {
  if (raiser?.kind === 'notch') return raiser.depth
  return raiser?.kind === 'shoulder' ? arc.axes[0] * (1 - Math.cos(arc.sweep)) : Infinity
}

/** Sources where two edges meet: tangent points with a jump of curvature, corners of raisers, sharp corners. */
function joinSources(plate: Plate, fineness: Fineness): Source[] {
  const sources: Source[] = []
  const isSharp = new Set(plate.sharpCorners.map(({ at }) => at.join()))
  for (const loop of plate.loops) {
    loop.forEach((after, i) => {
      const before = loop[(i + loop.length - 1) % loop.length]
      const [x, y] = after.curve.from
      const shorter = Math.min(lengthOf(before.curve), lengthOf(after.curve))
      const raiser = Math.max(before.raiser, after.raiser)
      let size = Infinity
      if (isSharp.has(after.curve.from.join())) size = SHARP * shorter
      else if (raiser >= 0) size = tangentAt(before, after) ? tangentSize(before, after) : CORNER * shorter
      if (Number.isFinite(size)) sources.push({ x, y, size: size * scaleFor(fineness, raiser) })
    })
  }
  return sources
}

function tangentAt(before: Edge, after: Edge): boolean {
  const [ax, ay] = derivativeOn(before.curve, 1)
  const [bx, by] = derivativeOn(after.curve, 0)
  return Math.abs(ax * by - ay * bx) < 1e-3 * Math.hypot(ax, ay) * Math.hypot(bx, by) && ax * bx + ay * by > 0
}

/**
 * Size at a tangent point: a part of the smaller radius, or of the length of an arc or line that is shorter. Infinity where neither the
 * curvature jumps nor a load begins (the pressure of a pin has a kink there).
 */
function tangentSize(before: Edge, after: Edge): number {
  const a = radiusOfCurvature(before.curve, 1)
  const b = radiusOfCurvature(after.curve, 0)
  const jumps = !(a === b || Math.abs(a - b) < 1e-6 * a)
  const loadBegins = (before.traction === null) !== (after.traction === null)
  if (!jumps && !loadBegins) return Infinity
  const lengths = [before, after].map(({ curve }) => (curve.kind === 'arc' ? TANGENT : CORNER) * lengthOf(curve))
  return Math.min(TANGENT * Math.min(a, b), ...lengths)
}

/**
 * Sources on both sides of narrow material: the distance from points of each edge to the edges that face it, as far as that lowers the
 * size that other sources ask for there.
 */
function gapSources(plate: Plate, fineness: Fineness, sizeWithout: SizeField): Source[] {
  const sources: Source[] = []
  const places = plate.loops.flatMap((loop, l) => loop.map((edge, e) => ({ edge, loop: l, position: e, size: loop.length })))
  const index = new Flatbush(places.length)
  for (const { edge } of places) index.add(...boxOf(edge.curve))
  index.finish()
  for (const own of places) {
    const scale = GAP * scaleFor(fineness, own.edge.raiser)
    for (let i = 0; i <= SAMPLES; i++) {
      const point = pointOn(own.edge.curve, i / SAMPLES)
      const normal = outwardNormal(own.edge.curve, i / SAMPLES)
      const [x, y] = point
      const reach = sizeWithout(x, y) / scale
      let gap = reach
      for (const found of index.search(x - reach, y - reach, x + reach, y + reach)) {
        const other = places[found]
        if (other === own || (other.loop === own.loop && neighbours(own.position, other.position, own.size))) continue
        gap = Math.min(gap, facingDistance(point, normal, other.edge.curve))
      }
      if (gap < reach) sources.push({ x, y, size: scale * gap })
    }
  }
  return sources
}

function neighbours(a: number, b: number, count: number): boolean {
  const apart = Math.abs(a - b)
  return apart === 1 || apart === count - 1
}

/** Distance from a boundary point into the material to a curve that it faces (within 60 degrees of its normal), else Infinity. */
function facingDistance([x, y]: Point, normal: Point, curve: Curve): number {
  const [qx, qy] = nearestOn(curve, x, y).at
  const distance = Math.hypot(qx - x, qy - y)
  const inward = -(normal[0] * (qx - x) + normal[1] * (qy - y))
  return inward > 0.5 * distance ? distance : Infinity
}

// Where the strips of a collar run and how they end: which pieces want quads, and the cuts that give columns, tapers and lying rails
// their lengths.

import { pointOn, type Plate } from '../case/plate.ts'
import { LAYERS, STANDING } from './rail.ts'
import { at, cut, lengthBetween, materialAngle, type Ring, type Station } from './station.ts'

/** Material angles at a vertex, degrees, between which a strip can end or pass: less is a wedge, more a re-entrant corner. */
const LYING = 50
const REENTRANT = 200
/** Longest column in thicknesses of the strip, and where the strip falls by a layer: tapers keep angles above 25 degrees. */
const LONGEST = 1.7
const LONGEST_FALLING = 1.35
/** A strip whose first layer is thinner than this many sagittas of its arc, or that is thinner than this part of its length, gives way. */
const LEAST_SAGITTAS = 2
const LEAST_ASPECT = 0.12

/** Wants quads on the first piece of a straight edge that an arc runs into smoothly: the flank's end belongs to the root. */
export function markFlanks(plate: Plate, loop: number, ring: Ring): void {
  const isArc = ({ edge }: Station) => plate.loops[loop][edge].curve.kind === 'arc'
  const flank: Station[] = []
  ring.forEach((after, i) => {
    const before = at(ring, i - 1)
    if (before.edge === after.edge || Math.abs(materialAngle(plate, loop, ring, i) - 180) > 1) return
    if (isArc(before) && !isArc(after)) flank.push(after)
    if (isArc(after) && !isArc(before)) flank.push(before)
  })
  for (const station of flank) station.wanted = true
}

/** Takes quads away next to corners where no strip can pass or end. */
export function settleEnds(plate: Plate, loop: number, ring: Ring): void {
  const drop = (from: number, to: number) => {
    for (let i = from; i <= to; i++) at(ring, i).wanted = false
  }
  for (let changed = true; changed; ) {
    changed = false
    for (let i = 0; i < ring.length; i++) {
      const before = at(ring, i - 1).wanted
      const after = at(ring, i).wanted
      if (!before && !after) continue
      const angle = materialAngle(plate, loop, ring, i)
      if (angle > STANDING && angle <= REENTRANT) continue
      const lying = angle >= LYING && angle <= STANDING
      if (lying && before !== after) continue
      // two strips meet in a corner: the second one gives way, far enough for the first to lie on its edge
      if (lying) drop(i, i + 2)
      else {
        const pieces = angle < LYING ? 2 : 1
        if (before) drop(i - pieces, i - 1)
        if (after) drop(i, i + pieces - 1)
      }
      changed = true
    }
  }
}

/** Cuts the pieces between two strips until there are three: one for the end of either, one to keep them apart. */
export function widenStretches(plate: Plate, loop: number, ring: Ring, point: number[]): void {
  const bare = ring.filter(({ wanted }) => !wanted)
  if (bare.length === 0 || bare.length === ring.length) return
  for (let i = 0; i < ring.length; i++) {
    if (ring[i].wanted || !at(ring, i - 1).wanted) continue
    let count = 1
    while (!at(ring, i + count).wanted) count++
    if (count === 1) {
      cut(plate, loop, ring, i, 1 / 3, point)
      cut(plate, loop, ring, i + 1, 1 / 2, point)
    } else if (count === 2) cut(plate, loop, ring, i, 1 / 2, point)
  }
}

/** Halves columns that are long for their thickness (a narrow gap made them thin), backwards around the ring; true if it did. */
export function shortenColumns(plate: Plate, loop: number, ring: Ring, point: number[]): boolean {
  let shortened = false
  for (let i = ring.length - 1; i >= 0; i--) {
    const [station, next] = [ring[i], at(ring, i + 1)]
    if (!station.wanted) continue
    const falling = station.level !== next.level
    const thickness = falling ? (station.level > next.level ? station : next).thickness : Math.min(station.thickness, next.thickness)
    if (lengthBetween(point, station.vertex, next.vertex) <= (falling ? LONGEST_FALLING : LONGEST) * thickness) continue
    cut(plate, loop, ring, i, 1 / 2, point)
    shortened = true
  }
  return shortened
}

/** Takes quads away where the strip would be too thin for its arc or length, or would fold; true if it did. */
export function dropUnfit(plate: Plate, rings: readonly Ring[], point: readonly number[]): boolean {
  let dropped = false
  rings.forEach((ring, loop) => {
    ring.forEach((station, i) => {
      if (!station.wanted) return
      const next = at(ring, i + 1)
      const [ax, ay, bx, by] = [point[2 * station.vertex], point[2 * station.vertex + 1], point[2 * next.vertex], point[2 * next.vertex + 1]]
      const [mx, my] = pointOn(plate.loops[loop][station.edge].curve, (station.t0 + station.t1) / 2)
      const sagitta = Math.hypot(mx - (ax + bx) / 2, my - (ay + by) / 2)
      const length = Math.hypot(bx - ax, by - ay)
      const thickness = Math.min(station.thickness, next.thickness)
      const dx = bx + next.thickness * next.direction[0] - (ax + station.thickness * station.direction[0])
      const dy = by + next.thickness * next.direction[1] - (ay + station.thickness * station.direction[1])
      const outer = (dx * (bx - ax) + dy * (by - ay)) / length
      if (LAYERS[0] * thickness >= LEAST_SAGITTAS * sagitta && thickness >= LEAST_ASPECT * length && outer > 0.25 * length) return
      station.wanted = false
      dropped = true
    })
  })
  return dropped
}

/** At the ends of strips: cuts the bare piece so that a lying rail or a taper has its length, and sets lying rails' lengths. */
export function fitEnds(plate: Plate, loop: number, ring: Ring, point: number[]): void {
  // backwards, so that cuts don't move what is still to come
  for (let i = ring.length - 1; i >= 0; i--) {
    const station = ring[i]
    if (station.thickness === 0) continue
    const before = at(ring, i - 1)
    if (before.wanted && station.wanted) continue
    const ahead = before.wanted
    const far = ahead ? at(ring, i + 1) : before
    const length = lengthBetween(point, station.vertex, far.vertex)
    const wanted = station.thickness * (station.lies === 0 ? 1.25 * LAYERS[0] : 1)
    if (length > 1.4 * wanted) {
      const share = wanted / length
      cut(plate, loop, ring, ahead ? i : i - 1, ahead ? share : 1 - share, point)
      if (station.lies === 0) continue
    } else if (station.lies === 0) {
      station.thickness = Math.min(station.thickness, (1.5 * length) / LAYERS[0])
      continue
    }
    const own = ring.indexOf(station)
    const end = at(ring, ahead ? own + 1 : own - 1)
    station.thickness = lengthBetween(point, station.vertex, end.vertex)
  }
}

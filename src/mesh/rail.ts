// The rails of a collar: which way they stand, how long they are and how many layers they have.

import Flatbush from 'flatbush'
import { derivativeOn, type Plate, type Point } from '../case/plate.ts'
import { at, lengthBetween, materialAngle, type Ring, type Station } from './station.ts'

/** Where the layers of a strip end, from the edge, in parts of its thickness: thin next to the edge. */
export const LAYERS = [0.45, 1]
/** Thickness of the strip in lengths of its pieces. */
const THICKNESS = 1.8
/** Largest thickness in radii of the largest circle that touches the edge there and fits into the material: a third of a gap. */
const GAP_SHARE = 0.6
/** Thickness of neighbouring rails differs by at most this part of their distance. */
const SLOPE = 1
/** Material angle at a vertex, degrees, up to which a strip that ends there lies on the next edge; above it its last rail halves the angle. */
export const STANDING = 112

/** Directions and lengths of all rails: from the pieces beside them, the room across the material, and the rails next to them. */
export function setThickness(plate: Plate, rings: readonly Ring[], point: readonly number[]): void {
  const room = roomFinder(rings, point)
  rings.forEach((ring, loop) => {
    const length = ring.map(({ vertex }, i) => lengthBetween(point, vertex, at(ring, i + 1).vertex))
    ring.forEach((station, i) => {
      station.thickness = 0
      station.level = 0
      const before = at(ring, i - 1)
      if (!before.wanted && !station.wanted) return
      const angle = materialAngle(plate, loop, ring, i)
      const lies = angle > STANDING ? 0 : before.wanted ? 1 : -1
      const own = (before.wanted ? length[(i + ring.length - 1) % ring.length] : 0) + (station.wanted ? length[i] : 0)
      const [dx, dy] = derivativeOn(plate.loops[loop][station.edge].curve, station.t0)
      const turn = ((lies === 0 ? angle / 2 : lies === 1 ? 0 : angle) * Math.PI) / 180
      const speed = Math.hypot(dx, dy)
      const direction: Point = [
        (dx * Math.cos(turn) - dy * Math.sin(turn)) / speed,
        (dx * Math.sin(turn) + dy * Math.cos(turn)) / speed
      ]
      const both = before.wanted && station.wanted
      const straightOn = Math.abs(angle - 180) < 1
      const wanted = THICKNESS * (both ? own / 2 : own)
      station.lies = lies
      station.direction = direction
      station.thickness = Math.min(wanted, GAP_SHARE * room(loop, station, direction, straightOn ? [] : [before.edge, station.edge], 2 * wanted / GAP_SHARE))
    })
    // neighbours: two sweeps carry a limit around the ring either way
    const limit = (i: number, j: number) => {
      const [a, b] = [at(ring, i), at(ring, j)]
      if (a.thickness > 0 && b.thickness > 0) b.thickness = Math.min(b.thickness, a.thickness + SLOPE * lengthBetween(point, a.vertex, b.vertex))
    }
    for (let i = 0; i < 2 * ring.length; i++) limit(i, i + 1)
    for (let i = 2 * ring.length; i > 0; i--) limit(i, i - 1)
    setLevels(ring)
  })
}

/** Levels of the rails: as many as there are layers, falling to one at a free end. */
function setLevels(ring: Ring): void {
  ring.forEach((station, i) => {
    if (station.thickness === 0) return
    const end = at(ring, i - 1).wanted !== station.wanted
    station.level = end && station.lies === 0 ? 1 : LAYERS.length
  })
  const limit = (i: number, j: number) => {
    const [a, b] = [at(ring, i), at(ring, j)]
    if (a.level > 0 && b.level > 0) b.level = Math.min(b.level, a.level + 1)
  }
  for (let i = 0; i < ring.length; i++) if (ring[i].wanted) limit(i, i + 1)
  for (let i = ring.length - 1; i >= 0; i--) if (ring[i].wanted) limit(i + 1, i)
}

type RoomFinder = (loop: number, station: Station, direction: Point, without: readonly number[], reach: number) => number

/** Radius of the largest circle that touches the edge at a station and holds no point of the boundary, looked for within `reach`. */
function roomFinder(rings: readonly Ring[], point: readonly number[]): RoomFinder {
  const pieces = rings.flatMap((ring, loop) => ring.map(({ vertex, edge }, i) => ({ loop, edge, a: vertex, b: at(ring, i + 1).vertex })))
  const index = indexOf(pieces, point)
  return (loop, { vertex }, [nx, ny], without, reach) => {
    const [px, py] = [point[2 * vertex], point[2 * vertex + 1]]
    let radius = Infinity
    for (const found of index.search(px - reach, py - reach, px + reach, py + reach)) {
      const piece = pieces[found]
      if (piece.loop === loop && without.includes(piece.edge)) continue
      for (let share = 0; share <= 1; share += 0.25) {
        const dx = point[2 * piece.a] + share * (point[2 * piece.b] - point[2 * piece.a]) - px
        const dy = point[2 * piece.a + 1] + share * (point[2 * piece.b + 1] - point[2 * piece.a + 1]) - py
        const away = Math.hypot(dx, dy)
        const inward = nx * dx + ny * dy
        // points that lie almost along the edge are the edge itself
        if (inward > 0.05 * away) radius = Math.min(radius, (away * away) / (2 * inward))
      }
    }
    return radius
  }
}

/** A box index of pieces, each from vertex a to vertex b. */
export function indexOf(pieces: readonly { readonly a: number; readonly b: number }[], point: readonly number[]): Flatbush {
  const index = new Flatbush(pieces.length)
  for (const { a, b } of pieces) {
    const [x0, y0, x1, y1] = [point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1]]
    index.add(Math.min(x0, x1), Math.min(y0, y1), Math.max(x0, x1), Math.max(y0, y1))
  }
  index.finish()
  return index
}

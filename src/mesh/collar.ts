// The collar: a strip of quads in graded layers along every arc and a little beyond its tangent points. Planned here, before the
// triangles: which pieces of the boundary carry quads, and where the rails between them stand.
//
//          top      top             A rail stands on a vertex of the edge, square to it or halving the material's angle. It has as
//     ------o--------o--.           many nodes above its foot as the strip has layers there (its level). Two rails of the same
//           |        |    ` .       level enclose a column of quads; where the level falls by one, a triangle (a taper) closes the
//     ------o--------o--------o--.  column's top. At a free end the strip falls to level 0, the bare edge, one layer a column.
//           | column | taper  |    Where the edge turns away under 50 to 112 degrees (the mouth of a semicircular notch, the end
//     ------o--------o--------o--- of a fillet as large as its step) the strip ends in full: its last rail lies on the next edge.
//
// Triangles then fill what lies inside the front: tops and bare edges. A front piece that must be halved halves its column or taper
// with it, so quads and triangles always fit.

import Flatbush from 'flatbush'
import { derivativeOn, pointOn, type Plate, type Point } from '../case/plate.ts'
import type { DividedBoundary, Segment } from './divide.ts'

/** A column of quads that may be halved: the part t0 .. t1 of an edge between the vertices a and b. */
export interface Column {
  readonly loop: number
  readonly edge: number
  readonly t0: number
  readonly t1: number
  readonly a: number
  readonly b: number
  /** Nodes of the rails on a and b, from foot to top, as many on each. */
  readonly left: readonly number[]
  readonly right: readonly number[]
}

/** The triangles between a front piece on the part t0 .. t1 of an edge and the node `apex` below it. */
export interface Taper {
  readonly loop: number
  readonly edge: number
  readonly t0: number
  readonly t1: number
  readonly apex: number
}

export interface Collar {
  /** (x, y) a vertex: those of the boundary, then those of the rails. */
  readonly point: readonly number[]
  /** What triangles have to fill lies on the left of these. */
  readonly front: readonly Segment[]
  readonly columns: readonly Column[]
  readonly tapers: readonly Taper[]
  /** Quads under tapers, four vertices each. */
  readonly quad: readonly number[]
  /** Pieces of the boundary that are neither under a column nor on the front. */
  readonly covered: readonly Segment[]
}

/** Where the layers of a strip end, from the edge, in parts of its thickness: thin next to the edge. */
export const LAYERS = [0.45, 1]
/** Thickness of the strip in lengths of its pieces. */
const THICKNESS = 1.8
/** Largest thickness in radii of the largest circle that touches the edge there and fits into the material: a third of a gap. */
const GAP_SHARE = 0.6
/** Thickness of neighbouring rails differs by at most this part of their distance. */
const SLOPE = 1
/** A strip whose first layer is thinner than this many sagittas of its arc, or that is thinner than this part of its length, gives way. */
const LEAST_SAGITTAS = 2
const LEAST_ASPECT = 0.12
/** Material angles at a vertex, degrees: rails lie on the next edge from LYING to STANDING, halve the angle up to REENTRANT. */
const LYING = 50
const STANDING = 112
const REENTRANT = 200
/** Longest column in thicknesses of the strip, and where the strip falls by a layer: tapers keep angles above 25 degrees. */
const LONGEST = 1.7
const LONGEST_FALLING = 1.35
/** Rounds of planning in which more and more columns give way; what is left then is dropped. */
const ROUNDS = 30

/** A vertex of the boundary and the piece of it that starts there. */
interface Station {
  readonly vertex: number
  readonly edge: number
  readonly t0: number
  t1: number
  /** True while the piece is to carry quads. */
  wanted: boolean
  /** Of the rail that stands here: direction, full thickness of the strip, layers, nodes from foot to top. */
  direction: Point
  thickness: number
  level: number
  nodes: readonly number[]
  /** What the end of a strip does here: lies on the piece after (1) or before (-1) this vertex, or falls to the edge (0). */
  lies: -1 | 0 | 1
}

type Ring = Station[]

/** Plans the strips of quads on a divided boundary, whose pieces it may cut once more where a strip ends. */
export function planCollar(plate: Plate, boundary: DividedBoundary): Collar {
  const point = [...boundary.point]
  const rings = ringsOf(plate, boundary)
  rings.forEach((ring, loop) => markFlanks(plate, loop, ring))
  for (let round = 0; round < ROUNDS; round++) {
    rings.forEach((ring, loop) => {
      settleEnds(plate, loop, ring)
      widenStretches(plate, loop, ring, point)
    })
    setThickness(plate, rings, point)
    const shortened = rings.map((ring, loop) => shortenColumns(plate, loop, ring, point))
    if (shortened.includes(true)) continue
    if (dropUnfit(plate, rings, point)) continue
    rings.forEach((ring, loop) => fitEnds(plate, loop, ring, point))
    const collar = layOut(plate, rings, point)
    if (!dropCrossing(rings, collar)) return collar
  }
  return bareCollar(boundary)
}

/** No collar: triangles fill the plate up to its edges. */
export function bareCollar({ point, segments }: DividedBoundary): Collar {
  return { point, front: segments, columns: [], tapers: [], quad: [], covered: [] }
}

function ringsOf(plate: Plate, { segments }: DividedBoundary): Ring[] {
  const rings: Ring[] = plate.loops.map(() => [])
  for (const { a, loop, edge, t0, t1 } of segments) {
    const wanted = plate.loops[loop][edge].curve.kind === 'arc'
    rings[loop].push({ vertex: a, edge, t0, t1, wanted, direction: [0, 0], thickness: 0, level: 0, nodes: [a], lies: 0 })
  }
  return rings
}

const at = (ring: Ring, i: number): Station => ring[(i + ring.length) % ring.length]

/** Angle of the material at station i, degrees: 180 inside an edge and at a tangent point. */
function materialAngle(plate: Plate, loop: number, ring: Ring, i: number): number {
  const before = at(ring, i - 1)
  const after = at(ring, i)
  if (before.edge === after.edge && after.t0 !== 0) return 180
  const [ax, ay] = derivativeOn(plate.loops[loop][before.edge].curve, before.t1)
  const [bx, by] = derivativeOn(plate.loops[loop][after.edge].curve, after.t0)
  return 180 - (Math.atan2(ax * by - ay * bx, ax * bx + ay * by) * 180) / Math.PI
}

/** Wants quads on the first piece of a straight edge that an arc runs into smoothly: the flank's end belongs to the root. */
function markFlanks(plate: Plate, loop: number, ring: Ring): void {
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
function settleEnds(plate: Plate, loop: number, ring: Ring): void {
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
function widenStretches(plate: Plate, loop: number, ring: Ring, point: number[]): void {
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

/** Cuts piece i of a ring at a share of its parameter, in place. */
function cut(plate: Plate, loop: number, ring: Ring, i: number, share: number, point: number[]): void {
  const station = at(ring, i)
  const t = station.t0 + share * (station.t1 - station.t0)
  const vertex = point.push(...pointOn(plate.loops[loop][station.edge].curve, t)) / 2 - 1
  ring.splice(ring.indexOf(station) + 1, 0, { ...station, vertex, t0: t, thickness: 0, level: 0, nodes: [vertex], lies: 0 })
  station.t1 = t
}

const lengthBetween = (point: readonly number[], a: number, b: number): number =>
  Math.hypot(point[2 * b] - point[2 * a], point[2 * b + 1] - point[2 * a + 1])

/** Directions and lengths of all rails: from the pieces beside them, the room across the material, and the rails next to them. */
function setThickness(plate: Plate, rings: readonly Ring[], point: readonly number[]): void {
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
function indexOf(pieces: readonly { readonly a: number; readonly b: number }[], point: readonly number[]): Flatbush {
  const index = new Flatbush(pieces.length)
  for (const { a, b } of pieces) {
    const [x0, y0, x1, y1] = [point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1]]
    index.add(Math.min(x0, x1), Math.min(y0, y1), Math.max(x0, x1), Math.max(y0, y1))
  }
  index.finish()
  return index
}

/** Takes quads away where the strip would be too thin for its arc or length, or would fold; true if it did. */
function dropUnfit(plate: Plate, rings: readonly Ring[], point: readonly number[]): boolean {
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

/** Halves columns that are long for their thickness (a narrow gap made them thin), backwards around the ring; true if it did. */
function shortenColumns(plate: Plate, loop: number, ring: Ring, point: number[]): boolean {
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

/** At the ends of strips: cuts the bare piece so that a lying rail or a taper has its length, and sets lying rails' lengths. */
function fitEnds(plate: Plate, loop: number, ring: Ring, point: number[]): void {
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

/** Rails, columns, tapers and the front of the planned rings. */
function layOut(plate: Plate, rings: readonly Ring[], boundaryPoint: readonly number[]): Collar {
  const point = [...boundaryPoint]
  const collar = { point, front: [] as Segment[], columns: [] as Column[], tapers: [] as Taper[], quad: [] as number[], covered: [] as Segment[] }
  rings.forEach((ring, loop) => {
    const lying = new Set<Station>()
    ring.forEach((station, i) => {
      const ahead = at(ring, i - 1).wanted
      if (ahead === station.wanted || station.lies === 0) station.nodes = standRail(station, point)
      else {
        const along = at(ring, ahead ? i : i - 1)
        lying.add(along)
        const far = ahead ? at(ring, i + 1).vertex : along.vertex
        const { nodes, pieces } = layRail(plate, loop, along, ahead, station.vertex, far, point)
        station.nodes = nodes
        collar.covered.push(...pieces)
      }
    })
    ring.forEach((station, i) => {
      if (lying.has(station)) return
      const next = at(ring, i + 1)
      const { edge, t0, t1, vertex: a } = station
      const base: Segment = { onEdge: true, a, b: next.vertex, loop, edge, t0, t1 }
      const [left, right] = [railOn(ring, i, 1), railOn(ring, i + 1, -1)]
      const [p, q] = [left.length - 1, right.length - 1]
      if (p === 0 && q === 0) collar.front.push(base)
      else collar.front.push({ ...base, onEdge: false, a: left[p], b: right[q] })
      if (p === q && p > 0) collar.columns.push({ loop, edge, t0, t1, a, b: next.vertex, left, right })
      if (p === q) return
      collar.covered.push(base)
      for (let k = 1; k <= Math.min(p, q); k++) collar.quad.push(left[k - 1], right[k - 1], right[k], left[k])
      collar.tapers.push({ loop, edge, t0, t1, apex: p > q ? left[p - 1] : right[q - 1] })
    })
  })
  return collar
}

/** Nodes of the rail at station i as a piece of the front beside it (after: 1, before: -1) meets it: a lying rail ends there. */
function railOn(ring: Ring, i: number, beside: -1 | 1): readonly number[] {
  const station = at(ring, i)
  const piece = at(ring, beside === 1 ? i : i - 1)
  const other = at(ring, beside === 1 ? i - 1 : i)
  // the far end of a lying rail is a bare vertex of the edge
  return station.level > 0 && (piece.wanted || (other.wanted && station.lies === 0)) ? station.nodes : [station.vertex]
}

/** Foot and layers of a rail through the material; adds its points. */
function standRail({ vertex, direction: [nx, ny], thickness, level }: Station, point: number[]): number[] {
  const [x, y] = [point[2 * vertex], point[2 * vertex + 1]]
  return [vertex, ...LAYERS.slice(0, level).map((share) => point.push(x + share * thickness * nx, y + share * thickness * ny) / 2 - 1)]
}

/** Foot and layers of a rail on a piece of the boundary, ahead of its foot or behind it, and the pieces that it is cut into. */
function layRail(plate: Plate, loop: number, { edge, t0, t1 }: Station, ahead: boolean, foot: number, far: number, point: number[]) {
  const { curve } = plate.loops[loop][edge]
  const nodes = [foot]
  const pieces: Segment[] = []
  let from = ahead ? t0 : t1
  for (const share of LAYERS) {
    const t = share === 1 ? (ahead ? t1 : t0) : ahead ? t0 + share * (t1 - t0) : t1 - share * (t1 - t0)
    const below = nodes[nodes.length - 1]
    const node = share === 1 ? far : point.push(...pointOn(curve, t)) / 2 - 1
    nodes.push(node)
    pieces.push({ onEdge: true, loop, edge, ...(ahead ? { a: below, b: node, t0: from, t1: t } : { a: node, b: below, t0: t, t1: from }) })
    from = t
  }
  return { nodes, pieces }
}

/** Takes quads away whose side of the front crosses another piece of the front; true if it did. */
function dropCrossing(rings: readonly Ring[], { point, front }: Collar): boolean {
  const index = indexOf(front, point)
  const lost = new Set<Segment>()
  for (const piece of front) {
    if (piece.onEdge) continue
    const { a, b } = piece
    const [x0, y0, x1, y1] = [point[2 * a], point[2 * a + 1], point[2 * b], point[2 * b + 1]]
    for (const found of index.search(Math.min(x0, x1), Math.min(y0, y1), Math.max(x0, x1), Math.max(y0, y1))) {
      const other = front[found]
      if (other === piece || other.a === a || other.b === b || other.a === b || other.b === a) continue
      if (crosses(point, piece, other)) lost.add(piece)
    }
  }
  for (const { loop, edge, t0, t1 } of lost) {
    // a taper stands on a bare piece: its strip loses the column beside it
    const i = rings[loop].findIndex((station) => station.edge === edge && station.t0 === t0 && station.t1 === t1)
    for (const station of rings[loop][i].wanted ? [rings[loop][i]] : [at(rings[loop], i - 1), at(rings[loop], i + 1)]) station.wanted = false
  }
  return lost.size > 0
}

function crosses(point: readonly number[], p: Segment, q: Segment): boolean {
  const side = (a: number, b: number, c: number) =>
    (point[2 * b] - point[2 * a]) * (point[2 * c + 1] - point[2 * a + 1]) - (point[2 * b + 1] - point[2 * a + 1]) * (point[2 * c] - point[2 * a])
  return side(p.a, p.b, q.a) * side(p.a, p.b, q.b) <= 0 && side(q.a, q.b, p.a) * side(q.a, q.b, p.b) <= 0
}

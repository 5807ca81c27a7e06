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

import { pointOn, type Plate } from '../case/plate.ts'
import type { DividedBoundary, Segment } from './divide.ts'
import { dropUnfit, fitEnds, markFlanks, settleEnds, shortenColumns, widenStretches } from './ends.ts'
import { indexOf, LAYERS, setThickness } from './rail.ts'
import { at, ringsOf, type Ring, type Station } from './station.ts'

/** A column of quads that may be halved, on the part t0 .. t1 of an edge. */
export interface Column {
  readonly loop: number
  readonly edge: number
  readonly t0: number
  readonly t1: number
  /** Nodes of the rails at t0 and t1, from foot to top, as many on each. */
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

/** Rounds of planning in which columns are shortened or give way; without an end to that there is no collar. */
const ROUNDS = 30

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
      if (p === q && p > 0) collar.columns.push({ loop, edge, t0, t1, left, right })
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

// Smoothing: inner nodes move toward the middle of their neighbours where that makes the worst element around them better (D.A.
// Field, Commun. Appl. Numer. Methods 4 (1988) 709, with the step refused that makes an angle worse). Which elements there are and how
// large does not change. Cost: a few passes over the nodes.

import type { Plate } from '../case/plate.ts'
import type { Segment } from './divide.ts'

const PASSES = 3
/** Shares of the way to the neighbours' middle that are tried. */
const STEPS = [1, 0.5]

/** Elements of one kind: (x, y) a node, `corners` nodes an element, counter-clockwise, and the pieces of the line around them. */
export interface Patchwork {
  readonly point: Float64Array
  readonly element: Int32Array
  readonly corners: 3 | 4
  readonly segments: readonly Segment[]
}

/** The nodes, moved; those on segments stay, and those of an element on an arc, which its bulge might reach. */
export function smoothNodes(plate: Plate, { point: given, element, corners, segments }: Patchwork): Float64Array {
  const point = given.slice()
  const nodes = point.length / 2
  const stars = starsOf(element, nodes)
  const isFixed = new Uint8Array(nodes)
  for (const { a, b } of segments) isFixed[a] = isFixed[b] = 1
  for (const { onEdge, a, b, loop, edge } of segments) {
    if (onEdge && plate.loops[loop][edge].curve.kind === 'arc') fixElement(a, b, element, corners, stars, isFixed)
  }
  for (let pass = 0; pass < PASSES; pass++) {
    for (let v = 0; v < nodes; v++) {
      if (!isFixed[v] && stars.start[v + 1] > stars.start[v]) moveNode(v, point, element, corners, stars)
    }
  }
  return point
}

/** For each node the corners (indices into `element`) where it stands: corner[start[v]] .. corner[start[v + 1] - 1]. */
interface Stars {
  readonly start: Int32Array
  readonly corner: Int32Array
}

function starsOf(element: Int32Array, nodes: number): Stars {
  const start = new Int32Array(nodes + 1)
  for (const v of element) start[v + 1]++
  for (let v = 0; v < nodes; v++) start[v + 1] += start[v]
  const corner = new Int32Array(element.length)
  const next = start.slice()
  element.forEach((v, i) => {
    corner[next[v]++] = i
  })
  return { start, corner }
}

/** The corner `step` corners after corner i of an element. */
function turn(i: number, step: number, corners: number): number {
  const k = i % corners
  return i - k + ((k + step) % corners)
}

/** Marks all nodes of the element on the side a-b, in place. */
function fixElement(a: number, b: number, element: Int32Array, corners: number, { start, corner }: Stars, isFixed: Uint8Array): void {
  for (let c = start[a]; c < start[a + 1]; c++) {
    const i = corner[c]
    if (element[turn(i, 1, corners)] !== b) continue
    for (let step = 0; step < corners; step++) isFixed[element[turn(i, step, corners)]] = 1
  }
}

/** Moves a node, in place, to the first place tried where the worst element of its star is better than it was. */
function moveNode(v: number, point: Float64Array, element: Int32Array, corners: number, stars: Stars): void {
  const { start, corner } = stars
  const [x, y] = [point[2 * v], point[2 * v + 1]]
  let [mx, my] = [0, 0]
  for (let c = start[v]; c < start[v + 1]; c++) {
    const a = element[turn(corner[c], 1, corners)]
    mx += point[2 * a]
    my += point[2 * a + 1]
  }
  const degree = start[v + 1] - start[v]
  const before = worstAround(v, point, element, corners, stars)
  for (const step of STEPS) {
    point[2 * v] = x + step * (mx / degree - x)
    point[2 * v + 1] = y + step * (my / degree - y)
    if (worstAround(v, point, element, corners, stars) > before) return
  }
  point[2 * v] = x
  point[2 * v + 1] = y
}

/** Least sine of a corner of the elements around a node; below 0 where one is turned over. */
function worstAround(v: number, point: Float64Array, element: Int32Array, corners: number, { start, corner }: Stars): number {
  let worst = 1
  for (let c = start[v]; c < start[v + 1]; c++) {
    const first = corner[c] - (corner[c] % corners)
    for (let k = 0; k < corners; k++) {
      const a = 2 * element[first + k]
      const b = 2 * element[first + (k + 1 < corners ? k + 1 : 0)]
      const z = 2 * element[first + (k > 0 ? k - 1 : corners - 1)]
      const ux = point[b] - point[a]
      const uy = point[b + 1] - point[a + 1]
      const vx = point[z] - point[a]
      const vy = point[z + 1] - point[a + 1]
      worst = Math.min(worst, (ux * vy - uy * vx) / Math.sqrt((ux * ux + uy * uy) * (vx * vx + vy * vy)))
    }
  }
  return worst
}

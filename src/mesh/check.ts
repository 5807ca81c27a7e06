// The invariants of a mesh, as code that the program runs on every mesh and the tests run on theirs.

import { areaOf, pointOn, type Plate } from '../case/plate.ts'
import { proveJacobian } from './jacobian.ts'
import { bulgesOf, mapPoint, elementMap, type ElementMap } from './map.ts'
import { edgeUnder, elementCount, nodeCount, nodesOf, sideCount, sidesOf, triangleCount, type Mesh } from './mesh.ts'
import { gaussLegendre, type Rule } from './quadrature.ts'

/** A mesh that breaks an invariant: a bug of the mesher. */
export class MeshError extends Error {
  override name = 'MeshError'
}

export interface MeshQuality {
  /** Smallest angle between the chords of neighbouring sides of any element, degrees. */
  readonly smallestAngle: number
  /**
   * Least scaled Jacobian of the exactly curved elements, P.M. Knupp, SIAM J. Sci. Comput. 23 (2001) 193: the least sine of an
   * element's corners, for a triangle times 2 / sqrt(3); 1 for an equilateral triangle or a square, 0 for a degenerate
   * element. In curved elements also looked for inside, at the points of the proof that they are not inside out.
   */
  readonly worstShape: number
  /** Smallest Jacobian found over its element's mean, 1 for straight triangles. */
  readonly worstJacobian: number
  /** Sum of the element areas, plate units squared. */
  readonly area: number
}

/** Area of a mesh against the plate's, relative: sums of some hundred rounded terms. */
const AREA_TOLERANCE = 1e-11
/** Gauss nodes that integrate an arc of 46 degrees to rounding. */
const SIDE_NODES = 12
/** Orders whose curved sides are chords, parabolas and exact: see `bulgesOf`. */
const CHORD = 1
const PARABOLA = 2
const EXACT = Infinity

/**
 * Quality figures of a mesh that fits the plate: every side inside shared by two elements, one to either side, and every boundary
 * side by one; the boundary sides cover every edge of the plate in order and without gap, so that every edge and raiser has
 * some; nodes on the boundary lie on it, to the bit; nodes - sides + elements = 1 - holes; the Jacobian is proven positive
 * everywhere in every element, with exactly curved sides as well as with the chords and parabolas of low orders; areas
 * add up to the plate's.
 * @throws MeshError that names the first broken invariant
 */
export function checkMesh(plate: Plate, mesh: Mesh): MeshQuality {
  checkSharing(mesh)
  checkBoundary(plate, mesh)
  checkRaisers(plate, mesh)
  const holes = plate.loops.length - 1
  const euler = nodeCount(mesh) - sideCount(mesh) + elementCount(mesh)
  if (euler !== 1 - holes) throw new MeshError(`nodes - sides + elements is ${euler}, not ${1 - holes}`)

  const [exact, chords, parabolas] = [EXACT, CHORD, PARABOLA].map((order) => bulgesOf(plate, mesh, order))
  const rule = gaussLegendre(SIDE_NODES)
  let area = 0
  let sharpest = -1
  let worstShape = 1
  let worstJacobian = 1
  for (let element = 0; element < elementCount(mesh); element++) {
    const map = elementMap(mesh, exact, element)
    const { least, worstShape: shape } = provePositive(mesh, map, element, 'exact')
    if (map.curved) {
      provePositive(mesh, elementMap(mesh, chords, element), element, 'straight')
      provePositive(mesh, elementMap(mesh, parabolas, element), element, 'parabolic')
    }
    const own = elementArea(map, rule)
    area += own
    sharpest = Math.max(sharpest, sharpestCosine(map.corner))
    worstShape = Math.min(worstShape, shape)
    // the reference triangle has the area 1/2, the square 4
    worstJacobian = Math.min(worstJacobian, (least * (map.corner.length === 6 ? 0.5 : 4)) / own)
  }
  const wanted = plate.loops.reduce((sum, loop) => sum + areaOf(loop), 0)
  if (!(Math.abs(area - wanted) <= AREA_TOLERANCE * wanted)) {
    throw new MeshError(`the elements' areas add up to ${area}, the plate has ${wanted}`)
  }
  return { smallestAngle: (Math.acos(Math.min(1, sharpest)) * 180) / Math.PI, worstShape, worstJacobian, area }
}

/** Each side of an element is listed with its own two nodes; inner sides are run through once in either direction. */
function checkSharing(mesh: Mesh): void {
  const forward = new Int32Array(sideCount(mesh))
  const backward = new Int32Array(sideCount(mesh))
  for (let element = 0; element < elementCount(mesh); element++) {
    const nodes = nodesOf(mesh, element)
    const sides = sidesOf(mesh, element)
    for (let k = 0; k < nodes.length; k++) {
      const a = nodes[k]
      const b = nodes[k + 1 < nodes.length ? k + 1 : 0]
      const side = sides[k]
      if (mesh.side[2 * side] !== Math.min(a, b) || mesh.side[2 * side + 1] !== Math.max(a, b)) {
        throw new MeshError(`side ${k} of ${nameOf(mesh, element)} has other nodes than the element`)
      }
      if (a < b) forward[side]++
      else backward[side]++
    }
  }
  for (let side = 0; side < forward.length; side++) {
    const count = forward[side] + backward[side]
    const wanted = mesh.sideBoundary[side] >= 0 ? 1 : 2
    if (count !== wanted) throw new MeshError(`side ${side} belongs to ${count} elements, not ${wanted}`)
    if (count === 2 && forward[side] !== 1) throw new MeshError(`both elements of side ${side} lie on the same side of it`)
  }
}

function checkBoundary(plate: Plate, mesh: Mesh): void {
  const { count, side, loop, edge, span, element, local } = mesh.boundary
  mesh.sideBoundary.forEach((b, s) => {
    if (b >= 0 && side[b] !== s) throw new MeshError(`side ${s} is taken for boundary side ${b}`)
  })
  let b = 0
  plate.loops.forEach((edges, l) => {
    const first = b
    let end = -1
    edges.forEach(({ curve }, e) => {
      let reached = 0
      for (; b < count && loop[b] === l && edge[b] === e; b++) {
        const t0 = span[2 * b]
        const t1 = span[2 * b + 1]
        if (t0 !== reached || !(t1 > reached)) throw new MeshError(`gap at boundary side ${b}`)
        reached = t1
        if (mesh.sideBoundary[side[b]] !== b || sidesOf(mesh, element[b])[local[b]] !== side[b]) {
          throw new MeshError(`boundary side ${b} is not the side of its element`)
        }
        const from = startOf(mesh, b)
        if (end >= 0 && from !== end) throw new MeshError(`boundary sides ${b - 1} and ${b} don't share a node`)
        end = endOf(mesh, b)
        checkPlace(mesh, from, pointOn(curve, t0))
        checkPlace(mesh, end, pointOn(curve, t1))
      }
      if (reached !== 1) throw new MeshError(`edge ${e} of loop ${l} is covered to ${reached} only`)
    })
    if (startOf(mesh, first) !== end) throw new MeshError(`the boundary sides of loop ${l} don't close`)
  })
  if (b !== count) throw new MeshError('boundary sides out of order')
}

function startOf(mesh: Mesh, b: number): number {
  return nodesOf(mesh, mesh.boundary.element[b])[mesh.boundary.local[b]]
}

function endOf(mesh: Mesh, b: number): number {
  const nodes = nodesOf(mesh, mesh.boundary.element[b])
  return nodes[(mesh.boundary.local[b] + 1) % nodes.length]
}

function checkPlace({ point }: Mesh, node: number, [x, y]: readonly [number, number]): void {
  if (point[2 * node] !== x || point[2 * node + 1] !== y) throw new MeshError(`node ${node} is off the boundary`)
}

/** Every raiser with a finite peak has boundary sides; a sharp corner has no edge of its own. */
function checkRaisers(plate: Plate, mesh: Mesh): void {
  const found = new Set<number>()
  for (let b = 0; b < mesh.boundary.count; b++) found.add(edgeUnder(plate, mesh, b).raiser)
  plate.raisers.forEach(({ id, sharp }, r) => {
    if (sharp === null && !found.has(r)) throw new MeshError(`no boundary side belongs to ${id}`)
  })
}

function provePositive(mesh: Mesh, map: ElementMap, element: number, sides: string) {
  const proof = proveJacobian(map)
  if (!proof.positive) {
    const found = proof.least > 0 ? 'is not proven to be the right way round' : 'is turned inside out'
    throw new MeshError(`${nameOf(mesh, element)}${map.curved ? `, with ${sides} sides,` : ''} ${found}`)
  }
  return proof
}

function nameOf(mesh: Mesh, element: number): string {
  const quad = element - triangleCount(mesh)
  return quad < 0 ? `triangle ${element}` : `quad ${quad}`
}

/** Largest cosine of the angles between the straight sides through the corners, each angle below 180 degrees. */
function sharpestCosine(corner: Float64Array): number {
  const count = corner.length / 2
  let sharpest = -1
  for (let k = 0; k < count; k++) {
    const next = k + 1 < count ? k + 1 : 0
    const last = k > 0 ? k - 1 : count - 1
    const ux = corner[2 * next] - corner[2 * k]
    const uy = corner[2 * next + 1] - corner[2 * k + 1]
    const vx = corner[2 * last] - corner[2 * k]
    const vy = corner[2 * last + 1] - corner[2 * k + 1]
    sharpest = Math.max(sharpest, (ux * vx + uy * vy) / Math.sqrt((ux * ux + uy * uy) * (vx * vx + vy * vy)))
  }
  return sharpest
}

/** Exact area of an element (its mean Jacobian times that of the reference element), by Green's theorem along the sides. */
function elementArea(map: ElementMap, rule: Rule): number {
  const { corner } = map
  const count = corner.length / 2
  // cross products about the first corner, so that nothing cancels in a small element far from the origin
  let twice = 0
  for (let k = 1; k + 1 < count; k++) {
    twice +=
      (corner[2 * k] - corner[0]) * (corner[2 * k + 3] - corner[1]) - (corner[2 * k + 1] - corner[1]) * (corner[2 * k + 2] - corner[0])
  }
  if (!map.curved) return twice / 2
  map.bulge.forEach((bulge, side) => {
    if (bulge) twice += bulgeArea(map, side, rule)
  })
  return twice / 2
}

/** Twice the area that a side's bulge adds: the integral of x dy - y dx along the side less its chord's. */
function bulgeArea(map: ElementMap, side: number, rule: Rule): number {
  const { corner } = map
  const reference = corner.length === 6 ? [0, 0, 1, 0, 0, 1] : [-1, -1, 1, -1, 1, 1, -1, 1]
  const a = 2 * side
  const b = a + 2 < corner.length ? a + 2 : 0
  const dXi = (reference[b] - reference[a]) / 2
  const dEta = (reference[b + 1] - reference[a + 1]) / 2
  const out = new Float64Array(6)
  let twice = 0
  for (let q = 0; q < rule.weight.length; q++) {
    mapPoint(map, reference[a] + (1 + rule.point[q]) * dXi, reference[a + 1] + (1 + rule.point[q]) * dEta, out)
    twice += rule.weight[q] * (out[0] * (out[3] * dXi + out[5] * dEta) - out[1] * (out[2] * dXi + out[4] * dEta))
  }
  return twice - (corner[a] * corner[b + 1] - corner[b] * corner[a + 1])
}

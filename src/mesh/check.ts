// The invariants of a mesh, as code that the program runs on every mesh and the tests run on theirs.

import { areaOf, pointOn, type Plate } from '../case/plate.ts'
import { bulgesOf, mapPoint, elementMap, type ElementMap } from './map.ts'
import { edgeUnder, nodeCount, sideCount, triangleCount, type Mesh } from './mesh.ts'
import { gaussLegendre, type Rule } from './quadrature.ts'

/** A mesh that breaks an invariant: a bug of the mesher. */
export class MeshError extends Error {
  override name = 'MeshError'
}

export interface MeshQuality {
  /** Smallest angle between the straight sides of any triangle, degrees. */
  readonly smallestAngle: number
  /** Smallest Jacobian found over its element's mean, 1 for straight triangles. */
  readonly worstJacobian: number
  /** Sum of the element areas, plate units squared. */
  readonly area: number
}

/** Area of a mesh against the plate's, relative: sums of some hundred rounded terms. */
const AREA_TOLERANCE = 1e-11
/** Points a side at which a curved element's Jacobian is looked at; its zeros cannot hide between them for turns up to 46 degrees. */
const JACOBIAN_SAMPLES = 8
/** Gauss nodes that integrate an arc of 46 degrees to rounding. */
const SIDE_NODES = 12

/**
 * Quality figures of a mesh that fits the plate: every side inside shared by two elements and every boundary side by one;
 * the boundary sides cover every edge of the plate without gap; nodes on the boundary lie on it; Jacobians positive;
 * areas add up to the plate's; nodes - sides + elements = 1 - holes.
 * @throws MeshError that names the first broken invariant
 */
export function checkMesh(plate: Plate, mesh: Mesh): MeshQuality {
  checkSharing(mesh)
  checkBoundary(plate, mesh)
  const holes = plate.loops.length - 1
  const euler = nodeCount(mesh) - sideCount(mesh) + triangleCount(mesh)
  if (euler !== 1 - holes) throw new MeshError(`nodes - sides + elements is ${euler}, not ${1 - holes}`)

  const bulges = bulgesOf(plate, mesh, Infinity)
  const rule = gaussLegendre(SIDE_NODES)
  let area = 0
  let smallestAngle = 180
  let worstJacobian = 1
  for (let t = 0; t < triangleCount(mesh); t++) {
    const map = elementMap(mesh, bulges, t)
    smallestAngle = Math.min(smallestAngle, smallestAngleOf(map.corner))
    const { least, mean } = jacobians(map, rule)
    if (!(least > 0)) throw new MeshError(`triangle ${t} is turned inside out`)
    worstJacobian = Math.min(worstJacobian, least / mean)
    area += mean / 2
  }
  const exact = plate.loops.reduce((sum, loop) => sum + areaOf(loop), 0)
  if (Math.abs(area - exact) > AREA_TOLERANCE * exact) throw new MeshError(`the elements' areas add up to ${area}, the plate has ${exact}`)
  return { smallestAngle, worstJacobian, area }
}

function checkSharing(mesh: Mesh): void {
  const uses = new Int32Array(sideCount(mesh))
  for (const side of mesh.triangleSide) uses[side]++
  uses.forEach((count, side) => {
    const wanted = mesh.sideBoundary[side] >= 0 ? 1 : 2
    if (count !== wanted) throw new MeshError(`side ${side} belongs to ${count} elements, not ${wanted}`)
  })
}

function checkBoundary(plate: Plate, mesh: Mesh): void {
  const { count, loop, edge, span, element, local } = mesh.boundary
  let b = 0
  plate.loops.forEach((edges, l) => {
    edges.forEach((_, e) => {
      let reached = 0
      for (; b < count && loop[b] === l && edge[b] === e; b++) {
        if (span[2 * b] !== reached || !(span[2 * b + 1] > reached)) throw new MeshError(`gap at boundary side ${b}`)
        reached = span[2 * b + 1]
        const node = mesh.triangle[3 * element[b] + local[b]]
        const [x, y] = pointOn(edgeUnder(plate, mesh, b).curve, span[2 * b])
        if (mesh.point[2 * node] !== x || mesh.point[2 * node + 1] !== y) throw new MeshError(`node ${node} is off the boundary`)
      }
      if (reached !== 1) throw new MeshError(`edge ${e} of loop ${l} is covered to ${reached} only`)
    })
  })
  if (b !== count) throw new MeshError('boundary sides out of order')
}

/** Degrees; angles of the straight triangle through the corners. */
function smallestAngleOf([x0, y0, x1, y1, x2, y2]: Float64Array): number {
  const a = Math.hypot(x2 - x1, y2 - y1)
  const b = Math.hypot(x0 - x2, y0 - y2)
  const c = Math.hypot(x1 - x0, y1 - y0)
  const angle = (opposite: number, p: number, q: number) =>
    Math.acos(Math.min(1, Math.max(-1, (p * p + q * q - opposite * opposite) / (2 * p * q))))
  return (Math.min(angle(a, b, c), angle(b, c, a), angle(c, a, b)) * 180) / Math.PI
}

/** Least and mean Jacobian; the mean, by Green's theorem along the sides, is twice the element's exact area. */
function jacobians(map: ElementMap, rule: Rule): { least: number; mean: number } {
  const [x0, y0, x1, y1, x2, y2] = map.corner
  const straight = (x1 - x0) * (y2 - y0) - (y1 - y0) * (x2 - x0)
  if (!map.curved) return { least: straight, mean: straight }
  const out = new Float64Array(6)
  let least = Infinity
  for (let i = 0; i <= JACOBIAN_SAMPLES; i++) {
    for (let j = 0; i + j <= JACOBIAN_SAMPLES; j++) {
      mapPoint(map, i / JACOBIAN_SAMPLES, j / JACOBIAN_SAMPLES, out)
      least = Math.min(least, out[2] * out[5] - out[3] * out[4])
    }
  }
  return { least, mean: straight + bulgeArea(map, rule) }
}

/** Twice the area that the bulges add: the closed integral of x dy - y dx along each curved side less its chord's. */
function bulgeArea(map: ElementMap, rule: Rule): number {
  const out = new Float64Array(6)
  let twice = 0
  for (let side = 0; side < 3; side++) {
    if (!map.bulge[side]) continue
    for (let q = 0; q < rule.weight.length; q++) {
      const lb = (1 + rule.point[q]) / 2
      const la = 1 - lb
      const [xi, eta, dXi, dEta] = side === 0 ? [lb, 0, 1, 0] : side === 1 ? [la, lb, -1, 1] : [0, la, 0, -1]
      mapPoint(map, xi, eta, out)
      twice += (rule.weight[q] / 2) * (out[0] * (out[3] * dXi + out[5] * dEta) - out[1] * (out[2] * dXi + out[4] * dEta))
    }
    const a = side
    const b = (side + 1) % 3
    twice -= map.corner[2 * a] * map.corner[2 * b + 1] - map.corner[2 * b] * map.corner[2 * a + 1]
  }
  return twice
}

// The map from a reference triangle or square to an element: straight, plus a bulge for each side that lies on an arc, exact.
// Blending of W.J. Gordon, C.A. Hall, Numer. Math. 21 (1973) 109; for triangles in the smooth form of B. Szabo, I. Babuska,
// Finite Element Analysis, 1991, ch. 6: X = sum Li Vi + sum over sides La Lb bulge(Lb - La); for quads
// X = sum Ni Vi + sum over sides (1 - s^2) / 4 bulge(s) (1 - t) / 2, with s along the side and t across from it.
// La Lb = (1 - s^2) / 4 on the side itself, and there bulge(s) = 4 (curve(s) - chord(s)) / (1 - s^2).
// Reference triangle: (0,0), (1,0), (0,1); reference square: (-1,-1), (1,-1), (1,1), (-1,1).
// Shape functions of order 1 and 2 cannot turn an exactly curved element without straining it: there the side is the chord, or the
// parabola through the arc's middle, which is the plain isoparametric element.

import { derivativeOn, pointOn, type Curve, type Plate, type Point } from '../case/plate.ts'
import { edgeUnder, nodesOf, sidesOf, type Mesh } from './mesh.ts'

/** Coefficients of the bulge as a polynomial in s, (x, y) interleaved, ascending powers. */
export type Bulge = Float64Array

/** Powers kept: the series' last term is below 1e-17 for a half-angle of 0.8 (an element on a quarter circle). */
const TERMS = 10

/** Lowest order whose elements follow arcs exactly. */
export const EXACT_FROM = 3

/**
 * Bulge of the part t0 .. t1 of an arc for elements of an order, null where the side is straight. With U, V the arc's conjugate radii at the middle of the part and
 * alpha its half-angle, curve - chord = U (cos(alpha s) - cos alpha) + V (sin(alpha s) - s sin alpha); both brackets are
 * divided by 1 - s^2 term by term in their Taylor series, so nothing cancels at the ends.
 * @throws RangeError when the part sweeps more than 120 degrees (the series would be cut too early)
 */
export function bulgeOf(curve: Curve, t0: number, t1: number, order: number): Bulge | null {
  if (curve.kind === 'line' || order < 2) return null
  if (order < EXACT_FROM) return parabola(curve, t0, t1)
  const middle = curve.start + (curve.sweep * (t0 + t1)) / 2
  const alpha = (curve.sweep * (t1 - t0)) / 2
  if (Math.abs(alpha) > Math.PI / 3) throw new RangeError(`a curved side sweeps ${2 * alpha} rad`)
  const cosTilt = Math.cos(curve.tilt)
  const sinTilt = Math.sin(curve.tilt)
  const [a, b] = curve.axes
  const turn = (x: number, y: number) => [cosTilt * x - sinTilt * y, sinTilt * x + cosTilt * y]
  const [ux, uy] = turn(a * Math.cos(middle), b * Math.sin(middle))
  const [vx, vy] = turn(-a * Math.sin(middle), b * Math.cos(middle))

  const bulge = new Float64Array(4 * TERMS)
  // coefficient of s^(2j): minus the sum over k > j of (-1)^k alpha^(2k) / (2k)!; of s^(2j+1): the same with 2k + 1
  let even = 0
  let odd = 0
  for (let j = TERMS - 1; j >= 0; j--) {
    const k = j + 1
    const term = ((-1) ** k * alpha ** (2 * k)) / factorial(2 * k)
    even -= term
    odd -= (term * alpha) / (2 * k + 1)
    bulge[4 * j] = 4 * ux * even
    bulge[4 * j + 1] = 4 * uy * even
    bulge[4 * j + 2] = 4 * vx * odd
    bulge[4 * j + 3] = 4 * vy * odd
  }
  return bulge
}

/** The bulge, constant, of the parabola through the ends and the middle of a part of a curve. */
function parabola(curve: Curve, t0: number, t1: number): Bulge {
  const [x0, y0] = pointOn(curve, t0)
  const [x1, y1] = pointOn(curve, t1)
  const [x, y] = pointOn(curve, (t0 + t1) / 2)
  const bulge = new Float64Array(4 * TERMS)
  bulge[0] = 4 * x - 2 * (x0 + x1)
  bulge[1] = 4 * y - 2 * (y0 + y1)
  return bulge
}

/** dX/ds of a side on the part t0 .. t1 of a curve, at s in [-1, 1], as elements of the order have it. */
export function sideTangent(curve: Curve, t0: number, t1: number, order: number, s: number): Point {
  if (curve.kind === 'line' || order >= EXACT_FROM) {
    const [dx, dy] = derivativeOn(curve, t0 + ((t1 - t0) * (1 + s)) / 2)
    return [(dx * (t1 - t0)) / 2, (dy * (t1 - t0)) / 2]
  }
  const [x0, y0] = pointOn(curve, t0)
  const [x1, y1] = pointOn(curve, t1)
  const bulge = order < 2 ? [0, 0] : parabola(curve, t0, t1)
  return [(x1 - x0 - s * bulge[0]) / 2, (y1 - y0 - s * bulge[1]) / 2]
}

function factorial(n: number): number {
  let product = 1
  for (let k = 2; k <= n; k++) product *= k
  return product
}

/** The bulge of each boundary side of a mesh, in the order of `mesh.boundary`, for elements of an order; null for straight ones. */
export function bulgesOf(plate: Plate, mesh: Mesh, order: number): (Bulge | null)[] {
  const { count, span } = mesh.boundary
  return Array.from({ length: count }, (_, b) => bulgeOf(edgeUnder(plate, mesh, b).curve, span[2 * b], span[2 * b + 1], order))
}

/** The map of one element: its corners and the bulges of its sides. */
export interface ElementMap {
  /** (x, y) of the three or four nodes. */
  readonly corner: Float64Array
  /** One a side; null where it is straight. */
  readonly bulge: readonly (Bulge | null)[]
  readonly curved: boolean
}

/** The map of an element (triangles first, then quads) with the bulges of the mesh's boundary sides. */
export function elementMap(mesh: Mesh, bulges: readonly (Bulge | null)[], element: number): ElementMap {
  const nodes = nodesOf(mesh, element)
  const corner = new Float64Array(2 * nodes.length)
  nodes.forEach((node, k) => {
    corner[2 * k] = mesh.point[2 * node]
    corner[2 * k + 1] = mesh.point[2 * node + 1]
  })
  const bulge = Array.from(sidesOf(mesh, element), (side) => {
    const b = mesh.sideBoundary[side]
    return b < 0 ? null : bulges[b]
  })
  return { corner, bulge, curved: bulge.some((side) => side !== null) }
}

/** Fills out with x, y, dx/dxi, dy/dxi, dx/deta, dy/deta at the reference point (xi, eta). */
export function mapPoint(map: ElementMap, xi: number, eta: number, out: Float64Array): void {
  if (map.corner.length === 6) mapTriangle(map, xi, eta, out)
  else mapQuad(map, xi, eta, out)
}

function mapTriangle({ corner, bulge, curved }: ElementMap, xi: number, eta: number, out: Float64Array): void {
  const [x0, y0, x1, y1, x2, y2] = corner
  out[0] = x0 + xi * (x1 - x0) + eta * (x2 - x0)
  out[1] = y0 + xi * (y1 - y0) + eta * (y2 - y0)
  out[2] = x1 - x0
  out[3] = y1 - y0
  out[4] = x2 - x0
  out[5] = y2 - y0
  if (!curved) return
  const l = [1 - xi - eta, xi, eta]
  const lXi = [-1, 1, 0]
  const lEta = [-1, 0, 1]
  for (let side = 0; side < 3; side++) {
    const coefficient = bulge[side]
    if (!coefficient) continue
    const a = side
    const b = (side + 1) % 3
    const blend = l[a] * l[b]
    const blendXi = lXi[a] * l[b] + l[a] * lXi[b]
    const blendEta = lEta[a] * l[b] + l[a] * lEta[b]
    addBulge(coefficient, l[b] - l[a], lXi[b] - lXi[a], lEta[b] - lEta[a], blend, blendXi, blendEta, out)
  }
}

function mapQuad({ corner, bulge, curved }: ElementMap, xi: number, eta: number, out: Float64Array): void {
  const [a, b, c, d] = [(1 - xi) / 2, (1 + xi) / 2, (1 - eta) / 2, (1 + eta) / 2]
  for (let axis = 0; axis < 2; axis++) {
    const [p, q, r, s] = [corner[axis], corner[2 + axis], corner[4 + axis], corner[6 + axis]]
    out[axis] = c * (a * p + b * q) + d * (a * s + b * r)
    out[2 + axis] = (c * (q - p) + d * (r - s)) / 2
    out[4 + axis] = (a * (s - p) + b * (r - q)) / 2
  }
  if (!curved) return
  for (let side = 0; side < 4; side++) {
    const coefficient = bulge[side]
    if (!coefficient) continue
    // along the side s = xi, eta, -xi, -eta; across from it t = eta, -xi, -eta, xi
    const alongXi = side % 2 === 0
    const sense = side < 2 ? 1 : -1
    const s = sense * (alongXi ? xi : eta)
    const t = alongXi ? sense * eta : -sense * xi
    const hump = (1 - s * s) / 4
    const across = (1 - t) / 2
    const byAlong = (-s / 2) * across * sense
    const byAcross = (hump / 2) * (alongXi ? -sense : sense)
    const [blendXi, blendEta] = alongXi ? [byAlong, byAcross] : [byAcross, byAlong]
    addBulge(coefficient, s, alongXi ? sense : 0, alongXi ? 0 : sense, hump * across, blendXi, blendEta, out)
  }
}

/** Adds blend * bulge(s) and its derivatives to `out`, in place; sXi and sEta are the derivatives of s. */
function addBulge(
  coefficient: Bulge,
  s: number,
  sXi: number,
  sEta: number,
  blend: number,
  blendXi: number,
  blendEta: number,
  out: Float64Array
): void {
  for (let axis = 0; axis < 2; axis++) {
    // Horner for the bulge and its slope
    let value = 0
    let slope = 0
    for (let power = 2 * TERMS - 1; power >= 0; power--) {
      slope = slope * s + value
      value = value * s + coefficient[2 * power + axis]
    }
    out[axis] += blend * value
    out[2 + axis] += blendXi * value + blend * slope * sXi
    out[4 + axis] += blendEta * value + blend * slope * sEta
  }
}

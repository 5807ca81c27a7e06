// Proof that an element's map keeps its orientation: the Jacobian J = X_xi x X_eta is positive in the whole element.
// Straight triangle: J is constant. Straight quad: J of the bilinear map is affine in (xi, eta), so it is least at a corner.
// Curved element: the reference element is covered with cells. With c a cell's centre and bounds e1, e2 on how far X_xi and
// X_eta get from their values there (second derivatives, bounded over the whole element, times the way to the cell's rim),
// J >= J(c) - |X_xi(c)| e2 - e1 |X_eta(c)| - e1 e2 in the cell. Where this isn't positive the cell is cut in four.
// Most elements need one cell, some four; a quarter of a circle in one side takes some tens.

import type { Bulge, ElementMap } from './map.ts'
import { mapPoint } from './map.ts'

export interface JacobianProof {
  /** True when J is proven positive everywhere; false when it is not positive somewhere, or undecided in the smallest cells. */
  readonly positive: boolean
  /** Least J found, at corners and centres of cells. */
  readonly least: number
  /** Least shape found at the same points: `shapeAt`. */
  readonly worstShape: number
  /** Cells that the proof looked at; 0 for straight elements. */
  readonly cells: number
}

/** Cells are not cut below this part of the element: what is undecided there has a shape below about a thousandth. */
const SMALLEST_CELL = 2 ** -10
/** Share of |X_xi| |X_eta| that J must exceed: some hundred roundings of a map's terms. */
const ROUNDING = 1e-13

/** Corners (xi, eta) of the reference triangle and square. */
const TRIANGLE = [0, 0, 1, 0, 0, 1]
const SQUARE = [-1, -1, 1, -1, 1, 1, -1, 1]

/** Proves, or fails to prove, that a map's Jacobian is positive everywhere, and finds the element's worst shape on the way. */
export function proveJacobian(map: ElementMap): JacobianProof {
  return map.curved ? proveCurved(map) : proveStraight(map)
}

/** The corners decide: there J is the cross product of the sides that meet (a quarter of it in a quad). */
function proveStraight({ corner }: ElementMap): JacobianProof {
  const count = corner.length / 2
  let least = Infinity
  let worstShape = 1
  let positive = true
  for (let k = 0; k < count; k++) {
    const next = k + 1 < count ? k + 1 : 0
    const last = k > 0 ? k - 1 : count - 1
    const ux = corner[2 * next] - corner[2 * k]
    const uy = corner[2 * next + 1] - corner[2 * k + 1]
    const vx = corner[2 * last] - corner[2 * k]
    const vy = corner[2 * last + 1] - corner[2 * k + 1]
    const cross = ux * vy - uy * vx
    const sine = cross / Math.sqrt((ux * ux + uy * uy) * (vx * vx + vy * vy))
    if (!(sine > ROUNDING)) positive = false
    least = Math.min(least, count === 3 ? cross : cross / 4)
    worstShape = Math.min(worstShape, count === 3 ? sine * EQUILATERAL : sine)
  }
  return { positive, least, worstShape, cells: 0 }
}

function proveCurved(given: ElementMap): JacobianProof {
  const isTriangle = given.corner.length === 6
  const map = isTriangle ? turned(given) : given
  const at = new Float64Array(6)
  let least = Infinity
  let worstShape = 1
  let cells = 0
  const jacobianAt = (xi: number, eta: number): number => {
    mapPoint(map, xi, eta, at)
    const jacobian = at[2] * at[5] - at[3] * at[4]
    least = Math.min(least, jacobian)
    worstShape = Math.min(worstShape, shapeAt(at, isTriangle))
    return jacobian
  }
  const proof = (positive: boolean): JacobianProof => ({ positive, least, worstShape, cells })

  const corner = isTriangle ? TRIANGLE : SQUARE
  for (let k = 0; k < corner.length; k += 2) {
    if (!(jacobianAt(corner[k], corner[k + 1]) > 0)) return proof(false)
  }
  const [alongXi, mixed, alongEta] = secondDerivatives(map)
  // the farthest points of a triangle from its centroid, in (xi, eta), are two thirds and one third of its size away
  const way = isTriangle ? (p: number, q: number) => (p + q + Math.max(p, q)) / 3 : (p: number, q: number) => p + q
  const driftXi = way(alongXi, mixed)
  const driftEta = way(mixed, alongEta)

  // a cell is (xi, eta, size): of a triangle its right-angled corner and its legs, < 0 for one that stands on its head;
  // of a square its centre and half its side
  const open = [0, 0, 1]
  while (open.length > 0) {
    const size = open.pop()!
    const eta = open.pop()!
    const xi = open.pop()!
    cells++
    const jacobian = isTriangle ? jacobianAt(xi + size / 3, eta + size / 3) : jacobianAt(xi, eta)
    if (!(jacobian > 0)) return proof(false)
    const lengthXi = Math.sqrt(at[2] * at[2] + at[3] * at[3])
    const lengthEta = Math.sqrt(at[4] * at[4] + at[5] * at[5])
    const e1 = driftXi * Math.abs(size)
    const e2 = driftEta * Math.abs(size)
    if (jacobian - lengthXi * e2 - e1 * lengthEta - e1 * e2 > ROUNDING * lengthXi * lengthEta) continue
    const h = size / 2
    if (Math.abs(h) < SMALLEST_CELL) return proof(false)
    if (isTriangle) open.push(xi, eta, h, xi + h, eta, h, xi, eta + h, h, xi + h, eta + h, -h)
    else open.push(xi - h, eta - h, h, xi + h, eta - h, h, xi + h, eta + h, h, xi - h, eta + h, h)
  }
  return proof(true)
}

/** The same triangle with its first curved side as side 1, where La Lb = xi eta has the smallest second derivatives; J stays. */
function turned({ corner, bulge, curved }: ElementMap): ElementMap {
  const first = (bulge.findIndex((side) => side !== null) + 2) % 3
  const order = [first, (first + 1) % 3, (first + 2) % 3]
  return {
    corner: Float64Array.from({ length: 6 }, (_, i) => corner[2 * order[i >> 1] + (i & 1)]),
    bulge: order.map((k) => bulge[k]),
    curved
  }
}

/** Upper bounds of |X_xi,xi|, |X_xi,eta|, |X_eta,eta| over the whole element. */
function secondDerivatives(map: ElementMap): [number, number, number] {
  return map.corner.length === 6 ? triangleSecondDerivatives(map) : quadSecondDerivatives(map)
}

/** Derivatives of La, Lb along xi and eta for the sides of the reference triangle: a, b = 0, 1; 1, 2; 2, 0. */
const SLOPES = [[-1, -1, 1, 0], [1, 0, 0, 1], [0, 1, -1, -1]] as const

/** Of La Lb bulge(s), s = Lb - La: La Lb <= 1/4, and its slope along a direction is at most the larger of those of La and Lb. */
function triangleSecondDerivatives({ bulge }: ElementMap): [number, number, number] {
  const bound: [number, number, number] = [0, 0, 0]
  bulge.forEach((side, k) => {
    if (!side) return
    const [value, slope, bend] = boundsOf(side)
    const [aXi, aEta, bXi, bEta] = SLOPES[k]
    const sXi = Math.abs(bXi - aXi)
    const sEta = Math.abs(bEta - aEta)
    const fXi = Math.max(Math.abs(aXi), Math.abs(bXi))
    const fEta = Math.max(Math.abs(aEta), Math.abs(bEta))
    bound[0] += 2 * Math.abs(aXi * bXi) * value + 2 * fXi * sXi * slope + (sXi * sXi * bend) / 4
    bound[1] += Math.abs(aXi * bEta + aEta * bXi) * value + (fXi * sEta + fEta * sXi) * slope + (sXi * sEta * bend) / 4
    bound[2] += 2 * Math.abs(aEta * bEta) * value + 2 * fEta * sEta * slope + (sEta * sEta * bend) / 4
  })
  return bound
}

/** Of the bilinear part its twist, and of (1 - s^2) / 4 bulge(s) (1 - t) / 2 its derivatives along s twice, and along s and t. */
function quadSecondDerivatives({ corner, bulge }: ElementMap): [number, number, number] {
  const twist = (axis: number) => (corner[axis] - corner[2 + axis] + corner[4 + axis] - corner[6 + axis]) / 4
  const bound: [number, number, number] = [0, Math.hypot(twist(0), twist(1)), 0]
  bulge.forEach((side, k) => {
    if (!side) return
    const [value, slope, bend] = boundsOf(side)
    bound[k % 2 === 0 ? 0 : 2] += value / 2 + slope + bend / 4
    bound[1] += value / 4 + slope / 8
  })
  return bound
}

/** Upper bounds on |s| <= 1 of a bulge, its first and its second derivative: the absolute sums of the coefficients. */
function boundsOf(bulge: Bulge): [value: number, slope: number, bend: number] {
  let value = 0
  let slope = 0
  let bend = 0
  for (let power = 0; 2 * power < bulge.length; power++) {
    const size = Math.sqrt(bulge[2 * power] * bulge[2 * power] + bulge[2 * power + 1] * bulge[2 * power + 1])
    value += size
    slope += power * size
    bend += power * (power - 1) * size
  }
  return [value, slope, bend]
}

/** 2 / sqrt(3): over the sine of 60 degrees. */
const EQUILATERAL = 2 / Math.sqrt(3)

/**
 * Shape of the element that a map's tangents at a point make, the scaled Jacobian of P.M. Knupp, SIAM J. Sci. Comput. 23 (2001)
 * 193: the least sine of its corners, for a triangle over that of 60 degrees. 1 for an equilateral triangle or a square
 * (any rectangle), 0 where it is degenerate, below 0 where it is inside out. On straight triangles the same at every point.
 * @param at x, y, dx/dxi, dy/dxi, dx/deta, dy/deta of `mapPoint`
 */
function shapeAt(at: Float64Array, isTriangle: boolean): number {
  const jacobian = at[2] * at[5] - at[3] * at[4]
  const xi = at[2] * at[2] + at[3] * at[3]
  const eta = at[4] * at[4] + at[5] * at[5]
  if (!isTriangle) return jacobian / Math.sqrt(xi * eta)
  const third = (at[4] - at[2]) ** 2 + (at[5] - at[3]) ** 2
  // the least sine lies between the two longest sides
  return (EQUILATERAL * jacobian) / Math.sqrt(Math.max(xi * eta, eta * third, third * xi))
}

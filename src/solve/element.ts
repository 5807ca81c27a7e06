// Stiffness of a triangle or quad of any order, condensed onto its nodes and sides.
// Straight triangles have a constant Jacobian, so their stiffness is a combination of three reference matrices that are
// integrated once; curved ones and all quads are integrated by quadrature. The interior modes are eliminated densely (static
// condensation: R.J. Guyan, AIAA J. 3 (1965) 380) and recovered afterwards. Plate units: E = 1, thickness = 1, plane stress.

import type { ElementMap } from '../mesh/map.ts'
import { squareRule, triangleRule } from '../mesh/quadrature.ts'
import { integrateGradients, tabulate, type GradientProducts, type ShapeTable } from './gradient.ts'
import { quadShape, type QuadSpace } from './quad.ts'
import { triangleShape, type ElementModes } from './shape.ts'

/** Plane-stress elasticity for E = 1: sxx = d11 exx + d12 eyy, sxy = d33 gxy (S. Timoshenko, J.N. Goodier, art. 6). */
export interface Elasticity {
  readonly d11: number
  readonly d12: number
  readonly d33: number
}

export function elasticity(nu: number): Elasticity {
  return { d11: 1 / (1 - nu * nu), d12: nu / (1 - nu * nu), d33: 1 / (2 * (1 + nu)) }
}

/** All that is the same for every triangle of one order. */
export interface ReferenceTriangle {
  readonly modes: ElementModes
  /** Integrals over the reference triangle of the products of derivatives, count x count, row by row. */
  readonly xiXi: Float64Array
  readonly xiEta: Float64Array
  readonly etaEta: Float64Array
  /** For curved triangles. */
  readonly table: ShapeTable
}

/** All that is the same for every quad of one order. */
export interface ReferenceQuad {
  readonly modes: ElementModes
  readonly straight: ShapeTable
  readonly curved: ShapeTable
}

/** Quadrature points beyond the order, a direction, for curved triangles: their integrand is rational, not polynomial. */
const EXTRA_POINTS = 4

/**
 * The same for quads. On a parallelogram order + 1 points are exact. On any other quad the Jacobian divides a polynomial, and
 * each further point cuts the error of the integrals by a ratio that the Jacobian's nearest zero sets. Against 14 further
 * points, in share of the order's own error in stress (orders 1 to 10): distorted straight quads up to 5 %, and a tenth where
 * an angle is almost 180 degrees (both at order 1); quads between an arc of 45 degrees and a chord close to it less than 1 %,
 * evenly thick ones less than 0.1 %.
 */
const EXTRA_POINTS_STRAIGHT_QUAD = 2
const EXTRA_POINTS_CURVED_QUAD = 3

export function referenceTriangle(order: number): ReferenceTriangle {
  const shape = triangleShape(order)
  const { count } = shape.modes
  const table = tabulate(shape, triangleRule(order + EXTRA_POINTS))
  const { rule, byXi, byEta } = table
  const integrate = (a: Float64Array, b: Float64Array) => {
    const product = new Float64Array(count * count)
    for (let q = 0; q < rule.weight.length; q++) addOuterProduct(product, a, b, q * count, count, rule.weight[q])
    return product
  }
  return {
    modes: shape.modes,
    xiXi: integrate(byXi, byXi),
    xiEta: integrate(byXi, byEta),
    etaEta: integrate(byEta, byEta),
    table
  }
}

/** @param space which interior functions, the usual ones if left out */
export function referenceQuad(order: number, space?: QuadSpace): ReferenceQuad {
  const shape = quadShape(order, space)
  return {
    modes: shape.modes,
    straight: tabulate(shape, squareRule(order + EXTRA_POINTS_STRAIGHT_QUAD)),
    curved: tabulate(shape, squareRule(order + EXTRA_POINTS_CURVED_QUAD))
  }
}

/** Adds weight * a b^T of two vectors at `offset` to a count x count matrix, in place. */
function addOuterProduct(
  matrix: Float64Array,
  a: Float64Array,
  b: Float64Array,
  offset: number,
  count: number,
  weight: number
): void {
  for (let i = 0; i < count; i++) {
    const factor = weight * a[offset + i]
    const row = i * count
    for (let j = 0; j < count; j++) matrix[row + j] += factor * b[offset + j]
  }
}

function straightProducts({ modes, xiXi, xiEta, etaEta }: ReferenceTriangle, { corner }: ElementMap): GradientProducts {
  const [x0, y0, x1, y1, x2, y2] = corner
  const jacobian = (x1 - x0) * (y2 - y0) - (y1 - y0) * (x2 - x0)
  // xi,x = (y2 - y0) / J and so on; one factor J of the area element cancels
  const xiX = y2 - y0
  const xiY = x0 - x2
  const etaX = y0 - y1
  const etaY = x1 - x0
  const n = modes.count
  const xx = new Float64Array(n * n)
  const xy = new Float64Array(n * n)
  const yy = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      const at = i * n + j
      const a = xiXi[at] / jacobian
      const b = xiEta[at] / jacobian
      const bT = xiEta[j * n + i] / jacobian
      const c = etaEta[at] / jacobian
      xx[at] = xiX * xiX * a + xiX * etaX * (b + bT) + etaX * etaX * c
      xy[at] = xiX * xiY * a + xiX * etaY * b + etaX * xiY * bT + etaX * etaY * c
      yy[at] = xiY * xiY * a + xiY * etaY * (b + bT) + etaY * etaY * c
    }
  }
  return { xx, xy, yy }
}

/**
 * Full stiffness of a triangle, square, row by row, size 2 count: dof 2i, 2i + 1 are the x and y amplitudes of
 * `functions[i]`, each multiplied by `sign[i]` (side modes of odd degree turn their sign with the side's direction).
 */
export function triangleStiffness(
  reference: ReferenceTriangle,
  map: ElementMap,
  moduli: Elasticity,
  functions: Int32Array,
  sign: Float64Array
): Float64Array {
  const products = map.curved ? integrateGradients(reference.table, map) : straightProducts(reference, map)
  return stiffnessOf(products, moduli, functions, sign)
}

/** Full stiffness of a quad, like that of a triangle. */
export function quadStiffness(
  reference: ReferenceQuad,
  map: ElementMap,
  moduli: Elasticity,
  functions: Int32Array,
  sign: Float64Array
): Float64Array {
  const products = integrateGradients(map.curved ? reference.curved : reference.straight, map)
  return stiffnessOf(products, moduli, functions, sign)
}

function stiffnessOf(
  { xx, xy, yy }: GradientProducts,
  { d11, d12, d33 }: Elasticity,
  functions: Int32Array,
  sign: Float64Array
): Float64Array {
  const n = functions.length
  const size = 2 * n
  const stiffness = new Float64Array(size * size)
  for (let i = 0; i < n; i++) {
    const row = functions[i] * n
    for (let j = 0; j < n; j++) {
      const at = row + functions[j]
      const mirrored = functions[j] * n + functions[i]
      const s = sign[i] * sign[j]
      const to = 2 * i * size + 2 * j
      stiffness[to] = s * (d11 * xx[at] + d33 * yy[at])
      stiffness[to + 1] = s * (d12 * xy[at] + d33 * xy[mirrored])
      stiffness[to + size] = s * (d12 * xy[mirrored] + d33 * xy[at])
      stiffness[to + size + 1] = s * (d11 * yy[at] + d33 * xx[at])
    }
  }
  return stiffness
}

/** An element condensed onto its outer dofs. */
export interface CondensedElement {
  /** Square, row by row, outer x outer. */
  readonly matrix: Float64Array
  /** Lower Cholesky factor of the inner block, inner x inner, row by row. */
  readonly factor: Float64Array
  /** factor^-1 times the block that couples inner (rows) with outer dofs (columns), inner x outer, row by row. */
  readonly coupling: Float64Array
}

/**
 * Eliminates the dofs from `outer` on: S = Koo - W^T W, W = L^-1 Kio, L L^T = Kii.
 * @param stiffness square, row by row; @param size its order; @param outer the number of leading dofs that stay
 */
export function condense(stiffness: Float64Array, size: number, outer: number): CondensedElement {
  const inner = size - outer
  const factor = new Float64Array(inner * inner)
  const coupling = new Float64Array(inner * outer)
  for (let i = 0; i < inner; i++) {
    const from = (outer + i) * size
    factor.set(stiffness.subarray(from + outer, from + outer + i + 1), i * inner)
    coupling.set(stiffness.subarray(from, from + outer), i * outer)
  }
  factoriseSmall(factor, inner)
  for (let i = 0; i < inner; i++) {
    for (let k = 0; k < i; k++) subtractRow(coupling, i * outer, k * outer, factor[i * inner + k], outer)
    const pivot = 1 / factor[i * inner + i]
    for (let j = 0; j < outer; j++) coupling[i * outer + j] *= pivot
  }
  const matrix = new Float64Array(outer * outer)
  for (let i = 0; i < outer; i++) {
    const row = matrix.subarray(i * outer, (i + 1) * outer)
    row.set(stiffness.subarray(i * size, i * size + outer))
    for (let k = 0; k < inner; k++) subtractScaled(row, coupling, k * outer, coupling[k * outer + i], outer)
  }
  return { matrix, factor, coupling }
}

/** In-place lower Cholesky factor of a small dense matrix, row by row. */
function factoriseSmall(matrix: Float64Array, n: number): void {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i * n + j]
      for (let k = 0; k < j; k++) sum -= matrix[i * n + k] * matrix[j * n + k]
      matrix[i * n + j] = i === j ? Math.sqrt(sum) : sum / matrix[j * n + j]
    }
  }
}

/** In place: row at `to` minus factor times the row at `from`, both of one array. */
function subtractRow(array: Float64Array, to: number, from: number, factor: number, length: number): void {
  for (let j = 0; j < length; j++) array[to + j] -= factor * array[from + j]
}

function subtractScaled(row: Float64Array, array: Float64Array, from: number, factor: number, length: number): void {
  for (let j = 0; j < length; j++) row[j] -= factor * array[from + j]
}

/** Inner amplitudes that belong to the outer ones (no load inside): ui = -L^-T W uo. */
export function recoverInner({ factor, coupling }: CondensedElement, outer: Float64Array): Float64Array {
  const n = outer.length
  const inner = coupling.length / n
  const u = new Float64Array(inner)
  for (let i = 0; i < inner; i++) {
    let sum = 0
    for (let j = 0; j < n; j++) sum -= coupling[i * n + j] * outer[j]
    u[i] = sum
  }
  for (let i = inner - 1; i >= 0; i--) {
    let sum = u[i]
    for (let k = i + 1; k < inner; k++) sum -= factor[k * inner + i] * u[k]
    u[i] = sum / factor[i * inner + i]
  }
  return u
}

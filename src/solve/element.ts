// Stiffness of a triangle of any order, condensed onto its nodes and sides.
// Straight triangles have a constant Jacobian, so their stiffness is a combination of three reference matrices that are
// integrated once; curved ones are integrated by quadrature. The interior modes are eliminated densely (static condensation:
// R.J. Guyan, AIAA J. 3 (1965) 380) and recovered afterwards. Plate units: E = 1, thickness = 1, plane stress.

import { mapPoint, type ElementMap } from '../mesh/map.ts'
import { triangleRule, type Rule } from '../mesh/quadrature.ts'
import { fillTriangleShape, shapeScratch, triangleModes, type TriangleModes } from './shape.ts'

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
  readonly modes: TriangleModes
  /** Integrals over the reference triangle of the products of derivatives, count x count, row by row. */
  readonly xiXi: Float64Array
  readonly xiEta: Float64Array
  readonly etaEta: Float64Array
  /** For curved triangles: a finer rule and the derivatives of the functions at its points, count numbers a point. */
  readonly rule: Rule
  readonly byXi: Float64Array
  readonly byEta: Float64Array
}

/** Quadrature points beyond the order, a direction, for curved triangles: their integrand is rational, not polynomial. */
const EXTRA_POINTS = 4

export function referenceTriangle(order: number): ReferenceTriangle {
  const modes = triangleModes(order)
  const { count } = modes
  const rule = triangleRule(order + EXTRA_POINTS)
  const points = rule.weight.length
  const byXi = new Float64Array(points * count)
  const byEta = new Float64Array(points * count)
  const value = new Float64Array(points * count)
  const scratch = shapeScratch(order)
  for (let q = 0; q < points; q++) {
    fillTriangleShape(order, rule.point[2 * q], rule.point[2 * q + 1], scratch, value, byXi, byEta, q * count)
  }
  const integrate = (a: Float64Array, b: Float64Array) => {
    const product = new Float64Array(count * count)
    for (let q = 0; q < points; q++) addOuterProduct(product, a, b, q * count, count, rule.weight[q])
    return product
  }
  return {
    modes,
    xiXi: integrate(byXi, byXi),
    xiEta: integrate(byXi, byEta),
    etaEta: integrate(byEta, byEta),
    rule,
    byXi,
    byEta
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

/** Gradient products of one triangle: the integrals of Ni,x Nj,x, Ni,x Nj,y and Ni,y Nj,y, count x count each. */
interface GradientProducts {
  readonly xx: Float64Array
  readonly xy: Float64Array
  readonly yy: Float64Array
}

function gradientProducts(reference: ReferenceTriangle, map: ElementMap): GradientProducts {
  return map.curved ? curvedProducts(reference, map) : straightProducts(reference, map)
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

function curvedProducts({ modes, rule, byXi, byEta }: ReferenceTriangle, map: ElementMap): GradientProducts {
  const n = modes.count
  const xx = new Float64Array(n * n)
  const xy = new Float64Array(n * n)
  const yy = new Float64Array(n * n)
  const at = new Float64Array(6)
  const gx = new Float64Array(n)
  const gy = new Float64Array(n)
  for (let q = 0; q < rule.weight.length; q++) {
    mapPoint(map, rule.point[2 * q], rule.point[2 * q + 1], at)
    const jacobian = at[2] * at[5] - at[3] * at[4]
    const offset = q * n
    for (let i = 0; i < n; i++) {
      const a = byXi[offset + i]
      const b = byEta[offset + i]
      gx[i] = (at[5] * a - at[3] * b) / jacobian
      gy[i] = (at[2] * b - at[4] * a) / jacobian
    }
    addGradients(xx, xy, yy, gx, gy, n, rule.weight[q] * jacobian)
  }
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < i; j++) {
      xx[j * n + i] = xx[i * n + j]
      yy[j * n + i] = yy[i * n + j]
    }
  }
  return { xx, xy, yy }
}

/** Adds weight * gradient products, in place; of the symmetric xx and yy the lower triangles only. */
function addGradients(
  xx: Float64Array,
  xy: Float64Array,
  yy: Float64Array,
  gx: Float64Array,
  gy: Float64Array,
  n: number,
  weight: number
): void {
  for (let i = 0; i < n; i++) {
    const x = weight * gx[i]
    const y = weight * gy[i]
    const row = i * n
    for (let j = 0; j <= i; j++) {
      xx[row + j] += x * gx[j]
      xy[row + j] += x * gy[j]
      yy[row + j] += y * gy[j]
    }
    for (let j = i + 1; j < n; j++) xy[row + j] += x * gy[j]
  }
}

/**
 * Full stiffness of a triangle, square, row by row, size 2 count: dof 2i, 2i + 1 are the x and y amplitudes of
 * `functions[i]`, each multiplied by `sign[i]` (side modes of odd degree turn their sign with the side's direction).
 */
export function triangleStiffness(
  reference: ReferenceTriangle,
  map: ElementMap,
  { d11, d12, d33 }: Elasticity,
  functions: Int32Array,
  sign: Float64Array
): Float64Array {
  const { xx, xy, yy } = gradientProducts(reference, map)
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

// Stiffness of a triangle or quad of any order. Straight triangles have a constant Jacobian, so their stiffness is a combination of
// three reference matrices that are integrated once; curved ones and all quads are integrated by quadrature. Plate units: E = 1,
// thickness = 1, plane stress.

import type { ElementMap } from '../mesh/map.ts'
import { triangleRule } from '../mesh/quadrature.ts'
import { integrateGradients, tabulate, type GradientProducts, type ShapeTable } from './gradient.ts'
import { lineFunctions, quadModes, quadProducts, type QuadProducts } from './quad.ts'
import { triangleShape, type ElementModes } from './shape.ts'
import { tensorStiffness, tensorTable, type TensorTable } from './tensor.ts'

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
  /** The functions in the order of the stiffness: outer ones, then inner ones. */
  readonly functions: Int32Array
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
  /** The products of functions of one variable; places are those in the stiffness: outer ones, then inner ones. */
  readonly products: QuadProducts
  readonly straight: TensorTable
  readonly curved: TensorTable
}

function outerThenInner({ outer, inner }: ElementModes): Int32Array {
  return Int32Array.from([...outer, ...inner])
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
    functions: outerThenInner(shape.modes),
    xiXi: integrate(byXi, byXi),
    xiEta: integrate(byXi, byEta),
    etaEta: integrate(byEta, byEta),
    table
  }
}

export function referenceQuad(order: number): ReferenceQuad {
  const modes = quadModes(order)
  const place = new Int32Array(modes.count)
  outerThenInner(modes).forEach((f, i) => {
    place[f] = i
  })
  const products = quadProducts(order)
  const line = lineFunctions(order)
  return {
    modes,
    products: { place: products.place.map((f) => place[f]), sign: products.sign },
    straight: tensorTable(line, order + EXTRA_POINTS_STRAIGHT_QUAD),
    curved: tensorTable(line, order + EXTRA_POINTS_CURVED_QUAD)
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
 * `reference.functions[i]`, each multiplied by `sign[i]` (side modes of odd degree turn their sign with the side's direction).
 */
export function triangleStiffness(reference: ReferenceTriangle, map: ElementMap, moduli: Elasticity, sign: Float64Array): Float64Array {
  const products = map.curved ? integrateGradients(reference.table, map) : straightProducts(reference, map)
  return stiffnessOf(products, moduli, reference.functions, sign)
}

/** Full stiffness of a quad, like that of a triangle: outer functions first, then inner ones. */
export function quadStiffness(reference: ReferenceQuad, map: ElementMap, moduli: Elasticity, sign: Float64Array): Float64Array {
  return tensorStiffness(map.curved ? reference.curved : reference.straight, reference.products, map, moduli, sign)
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

// Hierarchic shape functions of the quad: vertex, side and interior modes of any order.
// B. Szabo, I. Babuska, Finite Element Analysis, Wiley 1991, ch. 6. With phi_k(x) = (1 - x^2) / 4 kernel_k(x), the integrated
// Legendre polynomial of degree k that the triangle has along its sides too, so that the two kinds agree where they meet:
// side modes phi_k(s) (1 - t) / 2 with s along the side and t across from it, interior modes phi_i(xi) phi_j(eta).
// Listed by degree like those of the triangle, so a lower order is a leading part of a higher one.
// Reference square: nodes (-1,-1), (1,-1), (1,1), (-1,1); side k runs from node k to node k + 1, s = xi, eta, -xi, -eta.

import { fillSideKernels, modesByDegree, type ElementModes, type ElementShape } from './shape.ts'

/** Which products phi_i phi_j an order p has: i + j <= p (the serendipity family at order 2), or i, j <= p (Lagrange's). */
export type QuadSpace = 'trunk' | 'product'

/**
 * The space that quads have unless one is asked for. Columns of a collar are no parallelograms, and on such quads the trunk space lacks
 * polynomials that it has on squares (D.N. Arnold, D. Boffi, R.S. Falk, Math. Comp. 71 (2002) 909): measured on the same meshes
 * (DEVELOPERS.md), the product space has 5 to 50 times less error at any order, for inner dofs that are condensed away.
 */
export const QUAD_SPACE: QuadSpace = 'product'

/** Degree at which the interior function phi_i phi_j joins the space. */
function degreeOf(space: QuadSpace, i: number, j: number): number {
  return space === 'trunk' ? i + j : Math.max(i, j)
}

/** Where each shape function of a quad belongs, and what its interior ones are. */
export interface QuadModes extends ElementModes {
  /** (i, j) of each interior function phi_i(xi) phi_j(eta), in the order of `inner`. */
  readonly degrees: Int32Array
}

/** Number of interior functions: (order - 1)^2, in the trunk space (order - 2)(order - 3) / 2. */
export function quadInnerCount(order: number, space: QuadSpace = QUAD_SPACE): number {
  return space === 'product' ? (order - 1) ** 2 : (Math.max(0, order - 2) * Math.max(0, order - 3)) / 2
}

/** The index lists of a quad; 4 order functions on nodes and sides. */
export function quadModes(order: number, space: QuadSpace = QUAD_SPACE): QuadModes {
  const byDegree: number[][] = Array.from({ length: order + 1 }, () => [])
  for (let i = 2; i <= order; i++) {
    for (let j = 2; j <= order; j++) byDegree[degreeOf(space, i, j)]?.push(i, j)
  }
  const modes = modesByDegree(order, 4, (degree) => byDegree[degree].length / 2)
  return { ...modes, degrees: Int32Array.from(byDegree.flat()) }
}

/** The shape functions of a quad. */
export function quadShape(order: number, space: QuadSpace = QUAD_SPACE): ElementShape {
  const modes = quadModes(order, space)
  const [alongXi, alongEta] = [hump(order), hump(order)]
  return {
    modes,
    fill: (xi, eta, value, byXi, byEta, offset = 0) => {
      fillHump(order, xi, alongXi)
      fillHump(order, eta, alongEta)
      fillOuter(modes, xi, eta, alongXi, alongEta, value, byXi, byEta, offset)
      fillInner(modes, alongXi, alongEta, value, byXi, byEta, offset)
    }
  }
}

/** phi_k and its slope at one point, at index k = 2 .. order. */
interface Hump {
  readonly value: Float64Array
  readonly slope: Float64Array
  readonly kernel: Float64Array
  readonly kernelSlope: Float64Array
}

function hump(order: number): Hump {
  const array = () => new Float64Array(order + 1)
  return { value: array(), slope: array(), kernel: array(), kernelSlope: array() }
}

/** Fills phi_k and its slope at x, in place. */
function fillHump(order: number, x: number, { value, slope, kernel, kernelSlope }: Hump): void {
  fillSideKernels(order, x, kernel, kernelSlope)
  const blend = (1 - x * x) / 4
  for (let k = 2; k <= order; k++) {
    value[k] = blend * kernel[k - 2]
    slope[k] = (-x / 2) * kernel[k - 2] + blend * kernelSlope[k - 2]
  }
}

/** Vertex and side modes, in place. */
function fillOuter(
  { order, outer }: QuadModes,
  xi: number,
  eta: number,
  alongXi: Hump,
  alongEta: Hump,
  value: Float64Array,
  byXi: Float64Array,
  byEta: Float64Array,
  offset: number
): void {
  for (let node = 0; node < 4; node++) {
    const signXi = node === 1 || node === 2 ? 1 : -1
    const signEta = node < 2 ? -1 : 1
    const [a, b] = [(1 + signXi * xi) / 2, (1 + signEta * eta) / 2]
    value[offset + node] = a * b
    byXi[offset + node] = (signXi / 2) * b
    byEta[offset + node] = (signEta / 2) * a
  }
  for (let side = 0; side < 4; side++) {
    const horizontal = side % 2 === 0
    const sense = side < 2 ? 1 : -1
    const { value: phi, slope } = horizontal ? alongXi : alongEta
    // across = (1 - t) / 2 with t = eta, -xi, -eta, xi on the sides 0 .. 3
    const slant = (horizontal ? -sense : sense) / 2
    const across = 0.5 + slant * (horizontal ? eta : xi)
    const [along, other] = horizontal ? [byXi, byEta] : [byEta, byXi]
    for (let k = 2; k <= order; k++) {
      const at = offset + outer[4 + side * (order - 1) + k - 2]
      // phi_k(-x) = (-1)^k phi_k(x)
      const sign = k % 2 === 0 ? 1 : sense
      value[at] = sign * phi[k] * across
      along[at] = sign * slope[k] * across
      other[at] = sign * phi[k] * slant
    }
  }
}

/** Interior modes, in place. */
function fillInner(
  { inner, degrees }: QuadModes,
  alongXi: Hump,
  alongEta: Hump,
  value: Float64Array,
  byXi: Float64Array,
  byEta: Float64Array,
  offset: number
): void {
  for (let m = 0; m < inner.length; m++) {
    const at = offset + inner[m]
    const i = degrees[2 * m]
    const j = degrees[2 * m + 1]
    value[at] = alongXi.value[i] * alongEta.value[j]
    byXi[at] = alongXi.slope[i] * alongEta.value[j]
    byEta[at] = alongXi.value[i] * alongEta.slope[j]
  }
}

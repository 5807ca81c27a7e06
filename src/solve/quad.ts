// Hierarchic shape functions of the quad: vertex, side and interior modes of any order, in the product space.
// B. Szabo, I. Babuska, Finite Element Analysis, Wiley 1991, ch. 6. Every function is f_a(xi) f_b(eta) with f_0 = (1 - x) / 2,
// f_1 = (1 + x) / 2 and f_k = phi_k = (1 - x^2) / 4 kernel_k(x), the integrated Legendre polynomial of degree k that the triangle
// has along its sides too, so that the two kinds agree where they meet. Listed by degree like those of the triangle, so a lower
// order is a leading part of a higher one. Reference square: nodes (-1,-1), (1,-1), (1,1), (-1,1); side k runs from node k to k + 1.
//
// The trunk space (products of degree a + b up to the order) would have fewer functions, but on quads that are no parallelograms it
// lacks polynomials (D.N. Arnold, D. Boffi, R.S. Falk, Math. Comp. 71 (2002) 909): DEVELOPERS.md has the measurement.

import { fillSideKernels, modesByDegree, type ElementModes, type ElementShape } from './shape.ts'

/** Number of functions inside a quad. */
export function quadInnerCount(order: number): number {
  return (order - 1) ** 2
}

/** The index lists of a quad; 4 order functions on nodes and sides. Degree k has the inner ones with max(a, b) = k. */
export function quadModes(order: number): ElementModes {
  return modesByDegree(order, 4, (degree) => 2 * degree - 3)
}

/** The functions f_0 .. f_order of one variable. */
export interface LineFunctions {
  readonly count: number
  /** Fills the values and slopes at x, `count` numbers each. */
  fill(x: number, value: Float64Array, slope: Float64Array): void
}

export function lineFunctions(order: number): LineFunctions {
  const kernel = new Float64Array(order + 1)
  const kernelSlope = new Float64Array(order + 1)
  return {
    count: order + 1,
    fill: (x, value, slope) => {
      fillSideKernels(order, x, kernel, kernelSlope)
      value[0] = (1 - x) / 2
      value[1] = (1 + x) / 2
      slope[0] = -0.5
      slope[1] = 0.5
      const blend = (1 - x * x) / 4
      for (let k = 2; k <= order; k++) {
        value[k] = blend * kernel[k - 2]
        slope[k] = (-x / 2) * kernel[k - 2] + blend * kernelSlope[k - 2]
      }
    }
  }
}

/** Of the products f_a(xi) f_b(eta), a slowest, (order + 1)^2 of them: which function of the quad each is, and its sign there. */
export interface QuadProducts {
  readonly place: Int32Array
  readonly sign: Float64Array
}

export function quadProducts(order: number): QuadProducts {
  const { outer, inner } = quadModes(order)
  const n = order + 1
  const place = new Int32Array(n * n)
  const sign = new Float64Array(n * n).fill(1)
  const corner = [0, n, n + 1, 1]
  corner.forEach((at, node) => {
    place[at] = node
  })
  for (let k = 2; k <= order; k++) {
    // along the sides s = xi, eta, -xi, -eta, and phi_k(-x) = (-1)^k phi_k(x)
    const along = [k * n, n + k, k * n + 1, k]
    along.forEach((at, side) => {
      place[at] = outer[4 + side * (order - 1) + k - 2]
      if (side >= 2 && k % 2 === 1) sign[at] = -1
    })
  }
  let next = 0
  for (let k = 2; k <= order; k++) {
    for (let a = 2; a < k; a++) place[a * n + k] = inner[next++]
    for (let b = 2; b <= k; b++) place[k * n + b] = inner[next++]
  }
  return { place, sign }
}

/** The shape functions of a quad. */
export function quadShape(order: number): ElementShape {
  const { place, sign } = quadProducts(order)
  const { count, fill: fillLine } = lineFunctions(order)
  const [f, slopeF, g, slopeG] = [0, 1, 2, 3].map(() => new Float64Array(count))
  return {
    modes: quadModes(order),
    fill: (xi, eta, value, byXi, byEta, offset = 0) => {
      fillLine(xi, f, slopeF)
      fillLine(eta, g, slopeG)
      for (let a = 0; a < count; a++) {
        for (let b = 0; b < count; b++) {
          const s = sign[a * count + b]
          const at = offset + place[a * count + b]
          value[at] = s * f[a] * g[b]
          byXi[at] = s * slopeF[a] * g[b]
          byEta[at] = s * f[a] * slopeG[b]
        }
      }
    }
  }
}

// Stiffness of quads by sum factorisation (S.A. Orszag, J. Comput. Phys. 37 (1980) 70). Every function of the product space is
// f_a(xi) f_b(eta), so the integral of a product of derivatives of two of them is contracted along xi first, for every pair (a, c)
// and every eta of the rule, and then along eta: about order^5 products instead of order^6.

import { mapPoint, type ElementMap } from '../mesh/map.ts'
import { gaussLegendre } from '../mesh/quadrature.ts'
import type { Elasticity } from './element.ts'
import type { LineFunctions, QuadProducts } from './quad.ts'

/** The functions of one variable on a Gauss rule of `points` nodes. */
export interface TensorTable {
  readonly points: number
  readonly node: Float64Array
  readonly weight: Float64Array
  /** f_b at the nodes, then its slope there: 2 points numbers a function. */
  readonly along: Float64Array
  /** For each pair (a, c), a slowest: f'_a f'_c at the nodes, then f'_a f_c, f_a f'_c and f_a f_c; 4 points numbers a pair. */
  readonly pair: Float64Array
}

export function tensorTable({ count: functions, fill }: LineFunctions, points: number): TensorTable {
  const { point: node, weight } = gaussLegendre(points)
  const along = new Float64Array(2 * points * functions)
  const value = new Float64Array(functions)
  const slope = new Float64Array(functions)
  for (let q = 0; q < points; q++) {
    fill(node[q], value, slope)
    for (let b = 0; b < functions; b++) {
      along[2 * points * b + q] = value[b]
      along[2 * points * b + points + q] = slope[b]
    }
  }
  const pair = new Float64Array(4 * points * functions * functions)
  for (let a = 0; a < functions; a++) {
    for (let c = 0; c < functions; c++) {
      const at = 4 * points * (a * functions + c)
      for (let q = 0; q < points; q++) {
        const [fa, da] = [along[2 * points * a + q], along[2 * points * a + points + q]]
        const [fc, dc] = [along[2 * points * c + q], along[2 * points * c + points + q]]
        pair[at + q] = da * dc
        pair[at + points + q] = da * fc
        pair[at + 2 * points + q] = fa * dc
        pair[at + 3 * points + q] = fa * fc
      }
    }
  }
  return { points, node, weight, along, pair }
}

/**
 * Full stiffness of a quad, square, row by row, size 2 functions^2: dofs 2 i, 2 i + 1 are the x and y amplitudes of the function at
 * place i of `places`, times sign[i] as well.
 */
export function tensorStiffness(table: TensorTable, places: QuadProducts, map: ElementMap, moduli: Elasticity, sign: Float64Array): Float64Array {
  const { points, along, pair } = table
  const functions = along.length / (2 * points)
  const count = functions * functions
  const size = 2 * count
  const { uu, uv, vv } = coefficients(table, map, moduli)
  const stiffness = new Float64Array(size * size)
  const sums = new Float64Array(4 * points)
  const line = new Float64Array(2 * points * functions)
  const block = new Float64Array(functions * functions)
  const s = Float64Array.from(places.sign, (own, i) => own * sign[places.place[i]])

  /** Adds the block of the pair (a, c) of one of the three coefficients, rows of component `p`, columns of component `q`. */
  const scatter = (a: number, c: number, p: 0 | 1, q: 0 | 1): void => {
    for (let b = 0; b < functions; b++) {
      const i = a * functions + b
      const row = 2 * places.place[i] + p
      for (let d = 0; d < functions; d++) {
        const j = c * functions + d
        const column = 2 * places.place[j] + q
        const entry = s[i] * s[j] * block[b * functions + d]
        stiffness[row * size + column] = entry
        stiffness[column * size + row] = entry
      }
    }
  }
  for (let a = 0; a < functions; a++) {
    for (let c = 0; c < functions; c++) {
      const own = 4 * points * (a * functions + c)
      contractXi(uv, pair, own, points, sums)
      contractEta(sums, along, points, functions, line, block)
      scatter(a, c, 0, 1)
      if (c > a) continue
      contractXi(uu, pair, own, points, sums)
      contractEta(sums, along, points, functions, line, block)
      scatter(a, c, 0, 0)
      contractXi(vv, pair, own, points, sums)
      contractEta(sums, along, points, functions, line, block)
      scatter(a, c, 1, 1)
    }
  }
  return stiffness
}

/**
 * Factors of the products of derivatives in the strain energy, times weight and area, at every point of the rule: of (d/dxi, d/dxi), then
 * (xi, eta), (eta, xi) and (eta, eta); points^2 numbers each, eta slowest. For rows u and columns u, u and v, v and v.
 */
interface Coefficients {
  readonly uu: Float64Array
  readonly uv: Float64Array
  readonly vv: Float64Array
}

function coefficients({ points, node, weight }: TensorTable, map: ElementMap, { d11, d12, d33 }: Elasticity): Coefficients {
  const all = points * points
  const [uu, uv, vv] = [new Float64Array(4 * all), new Float64Array(4 * all), new Float64Array(4 * all)]
  const at = new Float64Array(6)
  for (let j = 0; j < points; j++) {
    for (let i = 0; i < points; i++) {
      mapPoint(map, node[i], node[j], at)
      const jacobian = at[2] * at[5] - at[3] * at[4]
      const w = (weight[i] * weight[j]) / jacobian
      // d/dx = (yEta d/dxi - yXi d/deta) / J, d/dy = (xXi d/deta - xEta d/dxi) / J
      const [xXi, xEta, yXi, yEta] = [at[5], -at[3], -at[4], at[2]]
      const q = j * points + i
      uu[q] = w * (d11 * xXi * xXi + d33 * yXi * yXi)
      uu[all + q] = w * (d11 * xXi * xEta + d33 * yXi * yEta)
      uu[2 * all + q] = uu[all + q]
      uu[3 * all + q] = w * (d11 * xEta * xEta + d33 * yEta * yEta)
      vv[q] = w * (d11 * yXi * yXi + d33 * xXi * xXi)
      vv[all + q] = w * (d11 * yXi * yEta + d33 * xXi * xEta)
      vv[2 * all + q] = vv[all + q]
      vv[3 * all + q] = w * (d11 * yEta * yEta + d33 * xEta * xEta)
      uv[q] = w * (d12 + d33) * xXi * yXi
      uv[all + q] = w * (d12 * xXi * yEta + d33 * yXi * xEta)
      uv[2 * all + q] = w * (d12 * xEta * yXi + d33 * yEta * xXi)
      uv[3 * all + q] = w * (d12 + d33) * xEta * yEta
    }
  }
  return { uu, uv, vv }
}

/** sums[k points + j]: over xi, the k-th factor at eta j times the k-th product of the pair at `own`. */
function contractXi(factor: Float64Array, pair: Float64Array, own: number, points: number, sums: Float64Array): void {
  for (let k = 0; k < 4; k++) {
    for (let j = 0; j < points; j++) {
      const from = (k * points + j) * points
      const to = own + k * points
      let sum = 0
      for (let i = 0; i < points; i++) sum += factor[from + i] * pair[to + i]
      sums[k * points + j] = sum
    }
  }
}

/** block[b functions + d]: over eta, f_b (s0 f_d + s1 f'_d) + f'_b (s2 f_d + s3 f'_d). */
function contractEta(sums: Float64Array, along: Float64Array, points: number, functions: number, line: Float64Array, block: Float64Array): void {
  const length = 2 * points
  for (let d = 0; d < functions; d++) {
    const from = length * d
    for (let j = 0; j < points; j++) {
      const f = along[from + j]
      const slope = along[from + points + j]
      line[from + j] = sums[j] * f + sums[points + j] * slope
      line[from + points + j] = sums[2 * points + j] * f + sums[3 * points + j] * slope
    }
  }
  for (let b = 0; b < functions; b++) {
    for (let d = 0; d < functions; d++) {
      let sum = 0
      for (let i = length * b, j = length * d, end = i + length; i < end; i++, j++) sum += along[i] * line[j]
      block[b * functions + d] = sum
    }
  }
}

// Products of the shape functions' gradients, integrated over one element by quadrature: what every stiffness is made of.
// For curved triangles; quads have a cheaper way (tensor.ts).

import { mapPoint, type ElementMap } from '../mesh/map.ts'
import type { Rule } from '../mesh/quadrature.ts'
import type { ElementShape } from './shape.ts'

/** Derivatives of an element's shape functions at the points of a rule, `count` numbers a point. */
export interface ShapeTable {
  readonly rule: Rule
  readonly count: number
  readonly byXi: Float64Array
  readonly byEta: Float64Array
}

export function tabulate({ modes, fill }: ElementShape, rule: Rule): ShapeTable {
  const { count } = modes
  const points = rule.weight.length
  const byXi = new Float64Array(points * count)
  const byEta = new Float64Array(points * count)
  const value = new Float64Array(points * count)
  for (let q = 0; q < points; q++) fill(rule.point[2 * q], rule.point[2 * q + 1], value, byXi, byEta, q * count)
  return { rule, count, byXi, byEta }
}

/** Integrals over one element of Ni,x Nj,x, Ni,x Nj,y and Ni,y Nj,y, count x count each, row by row. */
export interface GradientProducts {
  readonly xx: Float64Array
  readonly xy: Float64Array
  readonly yy: Float64Array
}

/** The gradient products of an element with the given map. */
export function integrateGradients(table: ShapeTable, map: ElementMap): GradientProducts {
  const { count: n } = table
  const points = table.rule.weight.length
  const { x, y, wx, wy } = gradientsOf(table, map)
  const xx = new Float64Array(n * n)
  const xy = new Float64Array(n * n)
  const yy = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      // four sums at a time, kept in registers: a matrix updated point by point would be stored and loaded for every product
      let [sumXX, sumXY, sumYX, sumYY] = [0, 0, 0, 0]
      for (let a = i * points, b = j * points, end = a + points; a < end; a++, b++) {
        sumXX += wx[a] * x[b]
        sumXY += wx[a] * y[b]
        sumYX += wx[b] * y[a]
        sumYY += wy[a] * y[b]
      }
      xx[i * n + j] = sumXX
      xx[j * n + i] = sumXX
      xy[j * n + i] = sumYX
      xy[i * n + j] = sumXY
      yy[i * n + j] = sumYY
      yy[j * n + i] = sumYY
    }
  }
  return { xx, xy, yy }
}

/**
 * Derivatives by x and y of every function at every point of a rule, and the same times the point's share of the area;
 * function by function, one number a point.
 */
interface Gradients {
  readonly x: Float64Array
  readonly y: Float64Array
  readonly wx: Float64Array
  readonly wy: Float64Array
}

function gradientsOf({ rule, count: n, byXi, byEta }: ShapeTable, map: ElementMap): Gradients {
  const points = rule.weight.length
  const array = () => new Float64Array(n * points)
  const [x, y, wx, wy] = [array(), array(), array(), array()]
  const at = new Float64Array(6)
  for (let q = 0; q < points; q++) {
    mapPoint(map, rule.point[2 * q], rule.point[2 * q + 1], at)
    const [, , xXi, yXi, xEta, yEta] = at
    const jacobian = xXi * yEta - yXi * xEta
    const weight = rule.weight[q] * jacobian
    for (let i = 0; i < n; i++) {
      const a = byXi[q * n + i]
      const b = byEta[q * n + i]
      const to = i * points + q
      x[to] = (yEta * a - yXi * b) / jacobian
      y[to] = (xXi * b - xEta * a) / jacobian
      wx[to] = weight * x[to]
      wy[to] = weight * y[to]
    }
  }
  return { x, y, wx, wy }
}

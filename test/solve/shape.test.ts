import { describe, expect, it } from 'vitest'
import { gaussLegendre, triangleRule } from '../../src/mesh/quadrature.ts'
import { fillTriangleShape, shapeScratch, triangleFunctionCount, triangleModes } from '../../src/solve/shape.ts'
import { sideFunctions } from '../../src/solve/side.ts'
import { expectNear } from '../support/near.ts'

function shapeAt(order: number, xi: number, eta: number) {
  const n = triangleFunctionCount(order)
  const [value, byXi, byEta] = [new Float64Array(n), new Float64Array(n), new Float64Array(n)]
  fillTriangleShape(order, xi, eta, shapeScratch(order), value, byXi, byEta)
  return { value, byXi, byEta }
}

describe('quadrature', () => {
  it('integrates every monomial up to its degree on the line and on the triangle', () => {
    const rule = gaussLegendre(7)
    for (let k = 0; k <= 13; k++) {
      let sum = 0
      for (let q = 0; q < 7; q++) sum += rule.weight[q] * rule.point[q] ** k
      expectNear(sum, k % 2 === 0 ? 2 / (k + 1) : 0, { abs: 1e-14, because: 'exact for degree 2n - 1' })
    }
    const factorial = (n: number): number => (n < 2 ? 1 : n * factorial(n - 1))
    const triangle = triangleRule(6)
    for (let a = 0; a <= 10; a++) {
      for (let b = 0; a + b <= 10; b++) {
        let sum = 0
        triangle.weight.forEach((w, q) => (sum += w * triangle.point[2 * q] ** a * triangle.point[2 * q + 1] ** b))
        const exact = (factorial(a) * factorial(b)) / factorial(a + b + 2)
        expectNear(sum, exact, { rel: 1e-12, because: 'integral of xi^a eta^b is a! b! / (a + b + 2)!' })
      }
    }
  })
})

describe('shape functions of the triangle', () => {
  it('differentiate to their own derivatives', () => {
    const order = 10
    const h = 1e-6
    for (const [xi, eta] of [[0.2, 0.3], [0.61, 0.17], [0.05, 0.9]]) {
      const { byXi, byEta } = shapeAt(order, xi, eta)
      const [right, left] = [shapeAt(order, xi + h, eta).value, shapeAt(order, xi - h, eta).value]
      const [up, down] = [shapeAt(order, xi, eta + h).value, shapeAt(order, xi, eta - h).value]
      byXi.forEach((slope, i) => {
        const size = 1 + Math.abs(slope)
        expectNear((right[i] - left[i]) / (2 * h), slope, { abs: 1e-6 * size, because: `central difference, function ${i}` })
        expectNear((up[i] - down[i]) / (2 * h), byEta[i], { abs: 1e-6 * (1 + Math.abs(byEta[i])), because: `function ${i}` })
      })
    }
  })

  it('span all polynomials of their degree, and no more', () => {
    const order = 6
    const points = triangleRule(order + 1)
    const n = triangleFunctionCount(order)
    // Gram matrix by quadrature; its Cholesky pivots stay away from zero when the functions are independent
    const gram = Array.from({ length: n }, () => new Float64Array(n))
    points.weight.forEach((w, q) => {
      const { value } = shapeAt(order, points.point[2 * q], points.point[2 * q + 1])
      for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) gram[i][j] += w * value[i] * value[j]
    })
    let least = Infinity
    for (let i = 0; i < n; i++) {
      const diagonal = gram[i][i]
      for (let j = 0; j <= i; j++) {
        let sum = gram[i][j]
        for (let k = 0; k < j; k++) sum -= gram[i][k] * gram[j][k]
        gram[i][j] = i === j ? Math.sqrt(sum) : sum / gram[j][j]
      }
      least = Math.min(least, gram[i][i] ** 2 / diagonal)
    }
    expect(n).toBe(28)
    expect(least).toBeGreaterThan(1e-6)
  })

  it('nest: the functions of a lower order are the leading ones of a higher order', () => {
    const low = shapeAt(5, 0.31, 0.24).value
    const high = shapeAt(9, 0.31, 0.24).value
    low.forEach((value, i) => expect(high[i]).toBe(value))
  })

  it('vanish where they must: side modes on the other sides, interior modes on all, and agree with the side functions', () => {
    const order = 8
    const modes = triangleModes(order)
    const corner = [[0, 0], [1, 0], [0, 1]]
    for (let side = 0; side < 3; side++) {
      for (const s of [-0.9, -0.2, 0.55]) {
        const [a, b] = [corner[side], corner[(side + 1) % 3]]
        const { value } = shapeAt(order, ((1 - s) * a[0] + (1 + s) * b[0]) / 2, ((1 - s) * a[1] + (1 + s) * b[1]) / 2)
        const own = sideFunctions(order, [s]).value
        modes.inner.forEach((f) => expectNear(value[f], 0, { abs: 1e-12, because: 'the point is off the side by rounding, the modes reach 1e3' }))
        for (let k = 0; k < 3; k++) {
          for (let degree = 2; degree <= order; degree++) {
            const f = modes.outer[3 + k * (order - 1) + degree - 2]
            expectNear(value[f], k === side ? own[degree] : 0, { abs: 1e-13, because: 'trace of a side mode' })
          }
        }
      }
    }
  })

  it('side modes are integrated Legendre polynomials: their slopes are orthonormal on the side', () => {
    const rule = gaussLegendre(12)
    const order = 9
    const { slope } = sideFunctions(order, rule.point)
    for (let j = 2; j <= order; j++) {
      for (let k = 2; k <= order; k++) {
        let sum = 0
        rule.weight.forEach((w, q) => (sum += w * slope[q * (order + 1) + j] * slope[q * (order + 1) + k]))
        expectNear(sum, j === k ? 1 : 0, { abs: 1e-12, because: 'slope of mode k is sqrt((2k - 1) / 2) P_{k-1} up to sign' })
      }
    }
  })
})

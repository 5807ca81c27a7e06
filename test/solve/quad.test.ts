import { describe, expect, it } from 'vitest'
import { EigenvalueDecomposition, Matrix } from 'ml-matrix'
import type { ElementMap } from '../../src/mesh/map.ts'
import { gaussLegendre, squareRule } from '../../src/mesh/quadrature.ts'
import { condense, elasticity, quadStiffness, recoverInner, referenceQuad } from '../../src/solve/element.ts'
import { quadModes, quadShape, type QuadSpace } from '../../src/solve/quad.ts'
import { triangleShape, type ElementShape } from '../../src/solve/shape.ts'
import { sideFunctions } from '../../src/solve/side.ts'
import { expectNear } from '../support/near.ts'

const spaces: QuadSpace[] = ['trunk', 'product']
const corner = [[-1, -1], [1, -1], [1, 1], [-1, 1]]

function shapeAt({ modes, fill }: ElementShape, xi: number, eta: number) {
  const [value, byXi, byEta] = [0, 1, 2].map(() => new Float64Array(modes.count))
  fill(xi, eta, value, byXi, byEta)
  return { value, byXi, byEta }
}

function straightQuad(...corners: number[]): ElementMap {
  return { corner: Float64Array.from(corners), bulge: [null, null, null, null], curved: false }
}

const quads = {
  square: straightQuad(0, 0, 1, 0, 1, 1, 0, 1),
  distorted: straightQuad(0.1, 0.2, 1.3, 0.1, 1.1, 1.6, 0.4, 1),
  'almost a triangle': straightQuad(0, 0, 1, 0, 0.52, 0.5, 0, 1),
  slender: straightQuad(0, 0, 0.3, 0.1, 0.25, 3, -0.1, 2.5)
}

function stiffnessOf(order: number, map: ElementMap, space: QuadSpace = 'trunk', nu = 0.3) {
  const reference = referenceQuad(order, space)
  const { count, outer, inner } = reference.modes
  const sign = new Float64Array(count).fill(1)
  const matrix = quadStiffness(reference, map, elasticity(nu), Int32Array.from([...outer, ...inner]), sign)
  return { size: 2 * count, outer: 2 * outer.length, matrix }
}

const rows = (matrix: Float64Array, n: number) =>
  Array.from({ length: n }, (_, i) => Array.from(matrix.subarray(i * n, (i + 1) * n)))

describe('quadrature on the square', () => {
  it('integrates every monomial up to its degree in each variable', () => {
    const { point, weight } = squareRule(4)
    for (let a = 0; a <= 7; a++) {
      for (let b = 0; b <= 7; b++) {
        let sum = 0
        weight.forEach((w, q) => (sum += w * point[2 * q] ** a * point[2 * q + 1] ** b))
        const exact = a % 2 === 1 || b % 2 === 1 ? 0 : 4 / ((a + 1) * (b + 1))
        expectNear(sum, exact, { abs: 1e-14, because: 'integral of xi^a over [-1, 1] is 2 / (a + 1) for even a' })
      }
    }
  })
})

describe('shape functions of the quad', () => {
  it('are as many as the space has', () => {
    // 4 order on the boundary and (order - 2)(order - 3) / 2 or (order - 1)^2 inside (B. Szabo, I. Babuska, ch. 6)
    expect([1, 2, 3, 4, 5, 8].map((order) => quadModes(order, 'trunk').count)).toEqual([4, 8, 12, 17, 23, 47])
    expect([1, 2, 3, 4, 5, 8].map((order) => quadModes(order, 'product').count)).toEqual([4, 9, 16, 25, 36, 81])
    expect(Array.from(quadModes(6, 'trunk').degrees)).toEqual([2, 2, 2, 3, 3, 2, 2, 4, 3, 3, 4, 2])
  })

  it('differentiate to their own derivatives', () => {
    const shape = quadShape(9, 'product')
    const h = 1e-6
    for (const [xi, eta] of [[0.2, 0.3], [-0.61, 0.17], [0.05, -0.9]]) {
      const { byXi, byEta } = shapeAt(shape, xi, eta)
      const [right, left] = [shapeAt(shape, xi + h, eta).value, shapeAt(shape, xi - h, eta).value]
      const [up, down] = [shapeAt(shape, xi, eta + h).value, shapeAt(shape, xi, eta - h).value]
      byXi.forEach((slope, i) => {
        expectNear((right[i] - left[i]) / (2 * h), slope, { abs: 1e-8, because: `central difference, function ${i}` })
        expectNear((up[i] - down[i]) / (2 * h), byEta[i], { abs: 1e-8, because: `central difference, function ${i}` })
      })
    }
  })

  it('nest: the functions of a lower order are the leading ones of a higher order', () => {
    for (const space of spaces) {
      const low = shapeAt(quadShape(5, space), 0.31, -0.24).value
      const high = shapeAt(quadShape(9, space), 0.31, -0.24).value
      low.forEach((value, i) => expect(high[i]).toBe(value))
    }
  })

  it('agree with the triangle along every side, and all others vanish there', () => {
    const order = 8
    const quad = quadShape(order, 'product')
    const triangle = triangleShape(order)
    for (let side = 0; side < 4; side++) {
      for (const s of [-1, -0.9, -0.2, 0.55, 1]) {
        const [a, b] = [corner[side], corner[(side + 1) % 4]]
        const { value } = shapeAt(quad, ((1 - s) * a[0] + (1 + s) * b[0]) / 2, ((1 - s) * a[1] + (1 + s) * b[1]) / 2)
        // side 0 of the triangle runs from (0, 0) to (1, 0)
        const trace = shapeAt(triangle, (1 + s) / 2, 0).value
        const own = sideFunctions(order, [s]).value
        const expected = new Float64Array(quad.modes.count)
        expected[side] = trace[0]
        expected[(side + 1) % 4] = trace[1]
        for (let degree = 2; degree <= order; degree++) {
          const onSide = trace[triangle.modes.outer[3 + degree - 2]]
          expected[quad.modes.outer[4 + side * (order - 1) + degree - 2]] = onSide
          expectNear(own[degree], onSide, { abs: 1e-14, because: 'the side has the same functions' })
        }
        value.forEach((v, i) => expectNear(v, expected[i], { abs: 1e-14, because: `function ${i} at s = ${s} of side ${side}` }))
      }
    }
  })

  it('have interior modes whose slopes are orthonormal along each direction', () => {
    const { point, weight } = gaussLegendre(10)
    const { modes, fill } = quadShape(7, 'product')
    const { degrees } = quadModes(7, 'product')
    const [value, byXi, byEta] = [0, 1, 2].map(() => new Float64Array(modes.count))
    // the one that is phi_i(xi) phi_2(eta)
    const at = (i: number) => modes.inner.find((_, m) => degrees[2 * m] === i && degrees[2 * m + 1] === 2)!
    for (let i = 2; i <= 7; i++) {
      for (let k = 2; k <= 7; k++) {
        let sum = 0
        weight.forEach((w, q) => {
          fill(point[q], 0, value, byXi, byEta)
          sum += w * byXi[at(i)] * byXi[at(k)]
        })
        // phi_2(0) = sqrt(3 / 2) / 2, so its square is 3 / 8
        expectNear(sum, i === k ? 3 / 8 : 0, { abs: 1e-13, because: 'slope of phi_i is sqrt((2i - 1) / 2) P_{i-1} up to sign' })
      }
    }
  })
})

describe('stiffness of a quad', () => {
  it('of order 1 on a square is that of the Q4', () => {
    // recalled from memory: O. Sigmund, Struct. Multidisc. Optim. 21 (2001) 120, E = 1, nodes counter-clockwise from (0, 0)
    const nu = 0.3
    const k = [
      1 / 2 - nu / 6, 1 / 8 + nu / 8, -1 / 4 - nu / 12, -1 / 8 + (3 * nu) / 8,
      -1 / 4 + nu / 12, -1 / 8 - nu / 8, nu / 6, 1 / 8 - (3 * nu) / 8
    ]
    const place = ['01234567', '10765432', '27056341', '36507214', '45670123', '54321076', '63412705', '72143650']
    const { matrix } = stiffnessOf(1, quads.square)
    place.forEach((row, i) => {
      Array.from(row).forEach((which, j) =>
        expectNear(matrix[8 * i + j], k[Number(which)] / (1 - nu * nu), { abs: 1e-14, because: `published, ${i} ${j}` })
      )
    })
  })

  it('of order 1 on a rectangle is made of the integrals along its sides, by hand', () => {
    const [a, b, nu] = [1.7, 0.6, 0.25]
    // integrals over [0, L] of Ni' Nj' L, Ni Nj / L and Ni' Nj of the two linear functions
    const stretch = [[1, -1], [-1, 1]]
    const mass = [[1 / 3, 1 / 6], [1 / 6, 1 / 3]]
    const mixed = [[-0.5, -0.5], [0.5, 0.5]]
    const [d11, d12, d33] = [1 / (1 - nu * nu), nu / (1 - nu * nu), 1 / (2 * (1 + nu))]
    const place = [[0, 0], [1, 0], [1, 1], [0, 1]]
    const { matrix } = stiffnessOf(1, straightQuad(3, 4, 3 + a, 4, 3 + a, 4 + b, 3, 4 + b), 'trunk', nu)
    place.forEach(([i, j], m) => {
      place.forEach(([k, l], n) => {
        const xx = (stretch[i][k] * mass[j][l] * b) / a
        const yy = (mass[i][k] * stretch[j][l] * a) / b
        const xy = mixed[i][k] * mixed[l][j]
        const yx = mixed[k][i] * mixed[j][l]
        const expected = [d11 * xx + d33 * yy, d12 * xy + d33 * yx, d12 * yx + d33 * xy, d11 * yy + d33 * xx]
        expected.forEach((entry, e) => {
          const at = (2 * m + (e >> 1)) * 8 + 2 * n + (e % 2)
          expectNear(matrix[at], entry, { abs: 1e-14, because: 'product of integrals along x and along y' })
        })
      })
    })
  })

  for (const [name, map] of Object.entries(quads)) {
    it(`${name}: symmetric, with exactly three motions that cost no energy, orders 1 to 8`, () => {
      for (let order = 1; order <= 8; order++) {
        const { size, matrix } = stiffnessOf(order, map)
        let largest = 0
        for (const value of matrix) largest = Math.max(largest, Math.abs(value))
        for (let i = 0; i < size; i++) {
          for (let j = 0; j < i; j++) {
            expectNear(matrix[i * size + j], matrix[j * size + i], { abs: 1e-14 * largest, because: 'symmetric' })
          }
        }
        const values = new EigenvalueDecomposition(new Matrix(rows(matrix, size)), { assumeSymmetric: true }).realEigenvalues
        const sorted = values.map(Math.abs).toSorted((a, b) => a - b)
        expect(sorted[2]).toBeLessThan(1e-13 * size * largest)
        expect(sorted[3]).toBeGreaterThan(1e-6 * largest)
      }
    })
  }

  it('condensed and recovered, leaves no force on the inner amplitudes', () => {
    const { size, outer, matrix } = stiffnessOf(4, straightQuad(-1, -1, 1, -1, 1, 1, -1, 1), 'product')
    const element = condense(matrix, size, outer)
    const boundary = Float64Array.from({ length: outer }, (_, i) => Math.cos(3 * i))
    const inner = recoverInner(element, boundary)
    const all = [...boundary, ...inner]
    for (let i = outer; i < size; i++) {
      let force = 0
      for (let j = 0; j < size; j++) force += matrix[i * size + j] * all[j]
      expectNear(force, 0, { abs: 1e-13, because: 'no load inside' })
    }
  })
})

import { describe, expect, it } from 'vitest'
import { EigenvalueDecomposition, Matrix } from 'ml-matrix'
import { circularArc } from '../../src/case/plate.ts'
import { bulgeOf, mapPoint, type ElementMap } from '../../src/mesh/map.ts'
import { gaussLegendre } from '../../src/mesh/quadrature.ts'
import { condense, recoverInner } from '../../src/solve/condense.ts'
import { elasticity, quadStiffness, referenceQuad } from '../../src/solve/element.ts'
import { quadModes, quadProducts, quadShape } from '../../src/solve/quad.ts'
import { triangleShape, type ElementShape } from '../../src/solve/shape.ts'
import { sideFunctions } from '../../src/solve/side.ts'
import { expectNear } from '../support/near.ts'

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

function stiffnessOf(order: number, map: ElementMap, nu = 0.3) {
  const reference = referenceQuad(order)
  const { count, outer } = reference.modes
  const sign = new Float64Array(count).fill(1)
  const matrix = quadStiffness(reference, map, elasticity(nu), sign)
  return { size: 2 * count, outer: 2 * outer.length, matrix }
}

/** The same stiffness point by point: the integral of B^T D B, outer functions first. */
function plainStiffness(order: number, map: ElementMap, points: number, nu = 0.3): Float64Array {
  const { modes, fill } = quadShape(order)
  const functions = [...modes.outer, ...modes.inner]
  const { d11, d12, d33 } = elasticity(nu)
  const { point, weight } = gaussLegendre(points)
  const size = 2 * modes.count
  const stiffness = new Float64Array(size * size)
  const [value, byXi, byEta] = [0, 1, 2].map(() => new Float64Array(modes.count))
  const at = new Float64Array(6)
  point.forEach((xi, p) => {
    point.forEach((eta, q) => {
      fill(xi, eta, value, byXi, byEta)
      mapPoint(map, xi, eta, at)
      const jacobian = at[2] * at[5] - at[3] * at[4]
      const w = weight[p] * weight[q] * jacobian
      const x = functions.map((f) => (at[5] * byXi[f] - at[3] * byEta[f]) / jacobian)
      const y = functions.map((f) => (at[2] * byEta[f] - at[4] * byXi[f]) / jacobian)
      for (let i = 0; i < modes.count; i++) {
        for (let j = 0; j < modes.count; j++) {
          stiffness[2 * i * size + 2 * j] += w * (d11 * x[i] * x[j] + d33 * y[i] * y[j])
          stiffness[2 * i * size + 2 * j + 1] += w * (d12 * x[i] * y[j] + d33 * y[i] * x[j])
          stiffness[(2 * i + 1) * size + 2 * j] += w * (d12 * y[i] * x[j] + d33 * x[i] * y[j])
          stiffness[(2 * i + 1) * size + 2 * j + 1] += w * (d11 * y[i] * y[j] + d33 * x[i] * x[j])
        }
      }
    })
  })
  return stiffness
}

const rows = (matrix: Float64Array, n: number) =>
  Array.from({ length: n }, (_, i) => Array.from(matrix.subarray(i * n, (i + 1) * n)))

describe('shape functions of the quad', () => {
  it('are as many as the space has', () => {
    // 4 order on the boundary and (order - 1)^2 inside (B. Szabo, I. Babuska, ch. 6)
    expect([1, 2, 3, 4, 5, 8].map((order) => quadModes(order).count)).toEqual([4, 9, 16, 25, 36, 81])
  })

  it('differentiate to their own derivatives', () => {
    const shape = quadShape(9)
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
    const low = shapeAt(quadShape(5), 0.31, -0.24).value
    const high = shapeAt(quadShape(9), 0.31, -0.24).value
    low.forEach((value, i) => expect(high[i]).toBe(value))
  })

  it('agree with the triangle along every side, and all others vanish there', () => {
    const order = 8
    const quad = quadShape(order)
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
    const { modes, fill } = quadShape(7)
    const { place } = quadProducts(7)
    const [value, byXi, byEta] = [0, 1, 2].map(() => new Float64Array(modes.count))
    // the one that is phi_i(xi) phi_2(eta)
    const at = (i: number) => place[8 * i + 2]
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
    const { matrix } = stiffnessOf(1, straightQuad(3, 4, 3 + a, 4, 3 + a, 4 + b, 3, 4 + b), nu)
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

  it('by sum factorisation is what plain quadrature on the same points gives', () => {
    const arc = circularArc([0, 0], 1, 0.2, 0.7)
    const bulge = bulgeOf(arc, 0, 1, 5)!
    const curved: ElementMap = {
      corner: Float64Array.of(...arc.from, ...arc.to, 0.3, 0.4, 0.6, 0.1),
      bulge: [bulge, null, null, null],
      curved: true
    }
    for (const map of [quads.distorted, quads['almost a triangle'], quads.slender, curved]) {
      for (const order of [1, 2, 3, 5, 8]) {
        const points = order + (map.curved ? 3 : 2)
        const { size, matrix } = stiffnessOf(order, map)
        const plain = plainStiffness(order, map, points)
        const largest = Math.max(...plain.map(Math.abs))
        for (let i = 0; i < size * size; i++) expectNear(matrix[i], plain[i], { abs: 1e-13 * largest, because: `entry ${i} at order ${order}` })
      }
    }
  })

  it('condensed and recovered, leaves no force on the inner amplitudes', () => {
    const { size, outer, matrix } = stiffnessOf(4, straightQuad(-1, -1, 1, -1, 1, 1, -1, 1))
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

import { describe, expect, it } from 'vitest'
import { bulgeOf, mapPoint, type ElementMap } from '../../src/mesh/map.ts'
import { circularArc, pointOn } from '../../src/case/plate.ts'
import { condense, recoverInner } from '../../src/solve/condense.ts'
import { elasticity, referenceTriangle, triangleStiffness } from '../../src/solve/element.ts'
import { EigenvalueDecomposition, Matrix, solve } from 'ml-matrix'
import { expectNear } from '../support/near.ts'

const straight: ElementMap = { corner: Float64Array.of(0.1, 0.2, 1.3, 0.4, 0.5, 1.6), bulge: [null, null, null], curved: false }

/** A triangle whose side 1 (from node 1 to node 2) is a quarter of a quarter circle about the origin, bulging inwards. */
function curvedTriangle(order = 3): ElementMap {
  const arc = circularArc([0, 0], 1, Math.PI / 3, -Math.PI / 6)
  const corner = Float64Array.of(1.2, 1.2, ...arc.from, ...arc.to)
  return { corner, bulge: [null, bulgeOf(arc, 0, 1, order), null], curved: true }
}

function stiffnessOf(order: number, map: ElementMap, nu = 0.3) {
  const reference = referenceTriangle(order)
  const { count, outer } = reference.modes
  const sign = new Float64Array(count).fill(1)
  return { size: 2 * count, outer: 2 * outer.length, matrix: triangleStiffness(reference, map, elasticity(nu), sign) }
}

const rows = (matrix: Float64Array, n: number) => Array.from({ length: n }, (_, i) => Array.from(matrix.subarray(i * n, (i + 1) * n)))

describe('map of a curved triangle', () => {
  it('puts its side on the arc to rounding, and the other sides stay straight', () => {
    const arc = circularArc([0, 0], 1, Math.PI / 3, -Math.PI / 6)
    const map = curvedTriangle()
    const out = new Float64Array(6)
    for (const s of [-1, -0.7, -0.1, 0.4, 0.95, 1]) {
      mapPoint(map, (1 - s) / 2, (1 + s) / 2, out)
      const [x, y] = pointOn(arc, (1 + s) / 2)
      expectNear(out[0], x, { abs: 1e-15, because: 'exact blending' })
      expectNear(out[1], y, { abs: 1e-15, because: 'exact blending' })
      mapPoint(map, (1 + s) / 2, 0, out)
      expectNear(out[0], 1.2 + ((1 + s) / 2) * (arc.from[0] - 1.2), { abs: 1e-15, because: 'side 0 is straight' })
    }
  })

  it('has the derivatives of its own values', () => {
    const map = curvedTriangle()
    const [a, b, out] = [new Float64Array(6), new Float64Array(6), new Float64Array(6)]
    const h = 1e-6
    mapPoint(map, 0.3, 0.25, out)
    mapPoint(map, 0.3 + h, 0.25, a)
    mapPoint(map, 0.3 - h, 0.25, b)
    expectNear((a[0] - b[0]) / (2 * h), out[2], { abs: 1e-9, because: 'central difference' })
    expectNear((a[1] - b[1]) / (2 * h), out[3], { abs: 1e-9, because: 'central difference' })
    mapPoint(map, 0.3, 0.25 + h, a)
    mapPoint(map, 0.3, 0.25 - h, b)
    expectNear((a[0] - b[0]) / (2 * h), out[4], { abs: 1e-9, because: 'central difference' })
    expectNear((a[1] - b[1]) / (2 * h), out[5], { abs: 1e-9, because: 'central difference' })
  })
})

describe('stiffness of a triangle', () => {
  it('of order 1 is the constant-strain triangle: V B^T D B, by hand', () => {
    const { matrix } = stiffnessOf(1, straight)
    const [x0, y0, x1, y1, x2, y2] = straight.corner
    const twice = (x1 - x0) * (y2 - y0) - (x2 - x0) * (y1 - y0)
    const b = [y1 - y2, y2 - y0, y0 - y1].map((v) => v / twice)
    const c = [x2 - x1, x0 - x2, x1 - x0].map((v) => v / twice)
    const B = new Matrix([b.flatMap((v) => [v, 0]), c.flatMap((v) => [0, v]), c.flatMap((v, i) => [v, b[i]])])
    const nu = 0.3
    const D = new Matrix([[1, nu, 0], [nu, 1, 0], [0, 0, (1 - nu) / 2]]).mul(1 / (1 - nu * nu))
    const expected = B.transpose().mmul(D).mmul(B).mul(twice / 2)
    for (let i = 0; i < 6; i++) {
      for (let j = 0; j < 6; j++) expectNear(matrix[6 * i + j], expected.get(i, j), { abs: 1e-14, because: 'O.C. Zienkiewicz, The FEM, CST' })
    }
  })

  for (const name of ['straight', 'curved'] as const) {
    it(`${name}: symmetric, with exactly three motions that cost no energy`, () => {
      for (const order of [1, 2, 4, 7]) {
        const { size, matrix } = stiffnessOf(order, name === 'straight' ? straight : curvedTriangle(order))
        let largest = 0
        for (const value of matrix) largest = Math.max(largest, Math.abs(value))
        for (let i = 0; i < size; i++) {
          for (let j = 0; j < i; j++) expectNear(matrix[i * size + j], matrix[j * size + i], { abs: 1e-14 * largest, because: 'symmetric' })
        }
        const values = new EigenvalueDecomposition(new Matrix(rows(matrix, size)), { assumeSymmetric: true }).realEigenvalues
        const sorted = values.map(Math.abs).toSorted((a, b) => a - b)
        // an exactly curved side turns without strain only as well as the order allows; chords and parabolas turn exactly
        const exact = name === 'curved' && order > 2 ? 2 : 3
        expect(sorted[exact - 1]).toBeLessThan(1e-12 * largest)
        expect(sorted[3]).toBeGreaterThan(1e-7 * largest)
        if (name === 'curved' && order === 7) expect(sorted[2]).toBeLessThan(1e-10 * largest)
      }
    })
  }

  it('lower orders are leading parts of higher ones', () => {
    const low = referenceTriangle(4)
    const high = referenceTriangle(8)
    for (let i = 0; i < low.modes.count; i++) {
      for (let j = 0; j < low.modes.count; j++) {
        expectNear(low.xiEta[i * low.modes.count + j], high.xiEta[i * high.modes.count + j], { abs: 1e-12, because: 'nested functions' })
      }
    }
  })
})

describe('condensation', () => {
  it('gives the same outer and inner amplitudes as the full system', () => {
    const { size, outer, matrix } = stiffnessOf(6, straight)
    // hold the rigid motions by stiffening the corners; load outer dofs only
    for (let i = 0; i < 6; i++) matrix[i * size + i] += 1
    const load = Array.from({ length: size }, (_, i) => (i < outer ? Math.sin(i + 1) : 0))
    const full = solve(new Matrix(rows(matrix, size)), Matrix.columnVector(load)).to1DArray()
    const element = condense(matrix, size, outer)
    const condensed = solve(new Matrix(rows(element.matrix, outer)), Matrix.columnVector(load.slice(0, outer))).to1DArray()
    condensed.forEach((u, i) => expectNear(u, full[i], { abs: 1e-11, because: 'Schur complement' }))
    recoverInner(element, Float64Array.from(condensed)).forEach((u, i) =>
      expectNear(u, full[outer + i], { abs: 1e-11, because: 'back substitution' })
    )
  })
})

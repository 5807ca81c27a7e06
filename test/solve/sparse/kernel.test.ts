import { CholeskyDecomposition, Matrix } from 'ml-matrix'
import { describe, expect, it } from 'vitest'
import { eliminateFront } from '../../../src/solve/sparse/kernel.ts'
import { expectNear } from '../../support/near.ts'
import { largestDifference, randomStream } from './patterns.ts'

/** A random positive definite n x n matrix, and a front of it: its panel and update with something before and after each. */
function randomFront(n: number, p: number) {
  const random = randomStream(n * 31 + p)
  const m = Matrix.from1DArray(n, n, Array.from({ length: n * n }, () => random() - 0.5))
  const a = m.mmul(m.transpose()).add(Matrix.eye(n, n))
  const rest = n - p
  const lower = new Float64Array(n * p + 5).fill(7)
  const stack = new Float64Array((rest * (rest + 1)) / 2 + 5).fill(7)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < p; j++) lower[2 + i * p + j] = a.get(i, j)
    for (let j = p; j <= i; j++) stack[3 + ((i - p) * (i - p + 1)) / 2 + j - p] = a.get(i, j)
  }
  return { a, lower, stack }
}

/** The panel's part of L, the diagonal itself, as the front keeps it in `lower` from 2 on. */
function panelOf(lower: Float64Array, n: number, p: number): Matrix {
  const panel = Matrix.zeros(n, p)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < p && j <= i; j++) panel.set(i, j, i === j ? 1 / lower[2 + i * p + j] : lower[2 + i * p + j])
  }
  return panel
}

/** The update as a full symmetric matrix, as the front keeps it in `stack` from 3 on. */
function updateOf(stack: Float64Array, rest: number): Matrix {
  const update = Matrix.zeros(rest, rest)
  for (let i = 0; i < rest; i++) {
    for (let j = 0; j <= i; j++) {
      update.set(i, j, stack[3 + (i * (i + 1)) / 2 + j])
      update.set(j, i, stack[3 + (i * (i + 1)) / 2 + j])
    }
  }
  return update
}

describe('elimination of a front', () => {
  it('leaves L and the Schur complement, for every remainder of rows and pivots', () => {
    for (let n = 1; n <= 14; n++) {
      for (let p = 1; p <= n; p++) {
        const { a, lower, stack } = randomFront(n, p)
        expect(eliminateFront(lower, 2, n, p, stack, 3, new Float64Array(p), 0)).toBe(-1)
        const l = new CholeskyDecomposition(a).lowerTriangularMatrix
        expectNear(largestDifference(panelOf(lower, n, p), l.subMatrix(0, n - 1, 0, p - 1)), 0, { abs: 1e-13, because: `L of ${n}, ${p}` })
        if (p < n) {
          // the Schur complement is what the rest of L multiplies to
          const rest = l.subMatrix(p, n - 1, p, n - 1)
          const schur = rest.mmul(rest.transpose())
          expectNear(largestDifference(updateOf(stack, n - p), schur), 0, { abs: 1e-13, because: `update of ${n}, ${p}` })
        }
        // nothing beside the front was touched
        expect([lower[1], lower[2 + n * p], stack[2], stack[stack.length - 2]]).toEqual([7, 7, 7, 7])
      }
    }
  })

  it('holds on a large front', () => {
    const [n, p] = [120, 71]
    const { a, lower, stack } = randomFront(n, p)
    expect(eliminateFront(lower, 2, n, p, stack, 3, new Float64Array(p), 0)).toBe(-1)
    const l = new CholeskyDecomposition(a).lowerTriangularMatrix
    expectNear(largestDifference(panelOf(lower, n, p), l.subMatrix(0, n - 1, 0, p - 1)), 0, { abs: 1e-12, because: 'L' })
  })

  it('says which row leaves too little', () => {
    for (const wrong of [0, 1, 2, 3, 6, 7]) {
      const lower = new Float64Array(8 * 8)
      for (let i = 0; i < 8; i++) lower[i * 8 + i] = i === wrong ? 1e-12 : 1
      expect(eliminateFront(lower, 0, 8, 8, new Float64Array(0), 0, new Float64Array(10).fill(1e-11), 2)).toBe(wrong)
      lower[wrong * 8 + wrong] = NaN
      expect(eliminateFront(lower, 0, 8, 8, new Float64Array(0), 0, new Float64Array(8), 0)).toBe(wrong)
    }
  })
})

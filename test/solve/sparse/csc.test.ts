import fc from 'fast-check'
import { CholeskyDecomposition, Matrix } from 'ml-matrix'
import { describe, expect, it } from 'vitest'
import { checkSymmetric, cliquesOf, multiply, oneNorm, type SymmetricMatrix } from '../../../src/solve/sparse/csc.ts'
import { analyse, factorise, solveFactor } from '../../../src/solve/sparse/index.ts'
import { expectNear } from '../../support/near.ts'
import { naiveFill, randomStream } from './patterns.ts'

// 4 -1  .  2
//-1  5  .  .
// .  .  3 -1
// 2  . -1  6
const small: SymmetricMatrix = {
  n: 4,
  colStart: Int32Array.of(0, 3, 4, 6, 7),
  row: Int32Array.of(0, 1, 3, 1, 2, 3, 3),
  value: Float64Array.of(4, -1, 2, 5, 3, -1, 6)
}

/** A random matrix with a dominant diagonal, so positive definite (S.A. Gershgorin, 1931). */
function randomMatrix(n: number, pairs: readonly (readonly [number, number])[], random: () => number): SymmetricMatrix {
  const columns = Array.from({ length: n }, () => new Set<number>())
  for (const [a, b] of pairs) if (a !== b) columns[Math.min(a, b)].add(Math.max(a, b))
  const colStart = [0]
  const row: number[] = []
  const value: number[] = []
  columns.forEach((rows, j) => {
    row.push(j, ...[...rows].toSorted((a, b) => a - b))
    value.push(n, ...[...rows].map(() => random() - 0.5))
    colStart.push(row.length)
  })
  return { n, colStart: Int32Array.from(colStart), row: Int32Array.from(row), value: Float64Array.from(value) }
}

function denseMatrix({ n, colStart, row, value }: SymmetricMatrix): Matrix {
  const dense = Matrix.zeros(n, n)
  for (let j = 0; j < n; j++) {
    for (let at = colStart[j]; at < colStart[j + 1]; at++) {
      dense.set(row[at], j, value[at])
      dense.set(j, row[at], value[at])
    }
  }
  return dense
}

describe('symmetric matrix', () => {
  it('multiplies as written out by hand', () => {
    // row by row: 4 - 2 + 8, -1 + 10, 9 - 4, 2 - 3 + 24
    expect([...multiply(small, Float64Array.of(1, 2, 3, 4))]).toEqual([10, 9, 5, 23])
  })

  it('has the largest column sum as its norm', () => {
    expect(oneNorm(small)).toBe(9) // 2 + 1 + 6 in the last column
  })

  it('passes its own check, and fails it when any one rule is broken', () => {
    expect(() => checkSymmetric(small)).not.toThrow()
    const broken: Partial<SymmetricMatrix>[] = [
      { colStart: Int32Array.of(0, 3, 4, 6) },
      { colStart: Int32Array.of(1, 3, 4, 6, 7) },
      { colStart: Int32Array.of(0, 3, 4, 6, 6) },
      { colStart: Int32Array.of(0, 3, 3, 6, 7) },
      { row: Int32Array.of(0, 1, 3, 2, 2, 3, 3) },
      { row: Int32Array.of(0, 3, 1, 1, 2, 3, 3) },
      { row: Int32Array.of(0, 1, 4, 1, 2, 3, 3) },
      { value: Float64Array.of(4, -1, 2, 5, 3, -1) },
      { value: Float64Array.of(4, -1, 2, 5, 3, NaN, 6) }
    ]
    for (const change of broken) expect(() => checkSymmetric({ ...small, ...change })).toThrow(RangeError)
  })

  it('is solved through its cliques, with the fill of its own pattern', () => {
    const pair = fc.tuple(fc.integer({ min: 0, max: 24 }), fc.integer({ min: 0, max: 24 }))
    fc.assert(
      fc.property(fc.array(pair, { maxLength: 60 }), fc.integer({ min: 1, max: 1e6 }), (pairs, seed) => {
        const random = randomStream(seed)
        const matrix = randomMatrix(25, pairs, random)
        checkSymmetric(matrix)
        const { graph, elements } = cliquesOf(matrix)
        const symbolic = analyse(graph)
        expect(symbolic.nnzL).toBe(25 + naiveFill(graph, symbolic.position).reduce((sum, { size }) => sum + size, 0))
        const load = Float64Array.from({ length: 25 }, () => random() - 0.5)
        const x = solveFactor(factorise(symbolic, elements, new Uint8Array(25)), load)
        const dense = new CholeskyDecomposition(denseMatrix(matrix)).solve(Matrix.columnVector(load)).to1DArray()
        x.forEach((value, i) => expectNear(value, dense[i], { abs: 1e-15, because: 'well conditioned, |x| about 0.02' }))
        multiply(matrix, x).forEach((value, i) => expectNear(value, load[i], { abs: 1e-14, because: 'A x = b' }))
      }),
      { seed: 21, numRuns: 100 }
    )
  })
})

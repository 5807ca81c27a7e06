// A symmetric sparse matrix by columns, for general use: its lower triangle, and the way from it to the element matrices that the
// factorisation takes.
//
// Invariants (`checkSymmetric`): colStart has n + 1 ascending numbers from 0; column j holds row[colStart[j] .. colStart[j + 1] - 1],
// strictly ascending, the diagonal (row j) first; `row` and `value` are equally long; every value is finite.

import type { CliqueGraph } from './graph.ts'

/** The lower triangle with its diagonal, column by column, rows ascending. */
export interface SymmetricMatrix {
  readonly n: number
  /** n + 1 positions into `row` and `value`. */
  readonly colStart: Int32Array
  readonly row: Int32Array
  readonly value: Float64Array
}

/** @throws RangeError that names the first broken invariant, with the sizes */
export function checkSymmetric({ n, colStart, row, value }: SymmetricMatrix): void {
  if (colStart.length !== n + 1) throw new RangeError(`colStart holds ${colStart.length} numbers, expected n + 1 = ${n + 1}`)
  if (colStart[0] !== 0) throw new RangeError(`colStart begins with ${colStart[0]}, expected 0`)
  if (row.length !== value.length) throw new RangeError(`row holds ${row.length} numbers, value ${value.length}`)
  if (colStart[n] !== row.length) throw new RangeError(`colStart ends with ${colStart[n]}, expected ${row.length}, the number of entries`)
  for (let j = 0; j < n; j++) {
    if (!(colStart[j] < colStart[j + 1])) throw new RangeError(`column ${j} is empty, expected its diagonal at least`)
    if (row[colStart[j]] !== j) throw new RangeError(`column ${j} begins at row ${row[colStart[j]]}, expected its diagonal`)
    for (let at = colStart[j] + 1; at < colStart[j + 1]; at++) {
      if (row[at] <= row[at - 1]) throw new RangeError(`column ${j} has row ${row[at]} after row ${row[at - 1]}, expected them ascending`)
    }
    if (row[colStart[j + 1] - 1] >= n) throw new RangeError(`column ${j} has row ${row[colStart[j + 1] - 1]}, expected less than n = ${n}`)
  }
  const wrong = value.findIndex((entry) => !Number.isFinite(entry))
  if (wrong >= 0) throw new RangeError(`entry ${wrong} is ${value[wrong]}, expected a finite number`)
}

/** A x (n numbers). */
export function multiply({ n, colStart, row, value }: SymmetricMatrix, x: Float64Array): Float64Array {
  const y = new Float64Array(n)
  for (let j = 0; j < n; j++) {
    let sum = value[colStart[j]] * x[j]
    for (let at = colStart[j] + 1; at < colStart[j + 1]; at++) {
      y[row[at]] += value[at] * x[j]
      sum += value[at] * x[row[at]]
    }
    y[j] += sum
  }
  return y
}

/** The largest sum of absolute values of a column, which is also the largest of a row. */
export function oneNorm({ n, colStart, row, value }: SymmetricMatrix): number {
  const sum = new Float64Array(n)
  for (let j = 0; j < n; j++) {
    sum[j] += Math.abs(value[colStart[j]])
    for (let at = colStart[j] + 1; at < colStart[j + 1]; at++) {
      sum[j] += Math.abs(value[at])
      sum[row[at]] += Math.abs(value[at])
    }
  }
  return sum.reduce((largest, s) => Math.max(largest, s), 0)
}

/**
 * The matrix as a sum of element matrices: one dof a block, a clique of one block for each diagonal entry and of two blocks for
 * each entry below it. Its fill is that of the matrix exactly (a clique a column would couple rows that the matrix does not).
 */
export function cliquesOf({ n, colStart, row, value }: SymmetricMatrix): { graph: CliqueGraph; elements: Float64Array[] } {
  const entries = row.length
  const cliqueStart = new Int32Array(entries + 1)
  const clique = new Int32Array(2 * entries - n)
  const elements: Float64Array[] = []
  let end = 0
  for (let j = 0; j < n; j++) {
    for (let at = colStart[j]; at < colStart[j + 1]; at++) {
      clique[end++] = j
      if (row[at] !== j) clique[end++] = row[at]
      cliqueStart[at + 1] = end
      elements.push(row[at] === j ? Float64Array.of(value[at]) : Float64Array.of(0, value[at], value[at], 0))
    }
  }
  return { graph: { vertices: n, cliqueStart, clique, weight: new Int32Array(n).fill(1) }, elements }
}

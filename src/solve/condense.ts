// Static condensation: the dofs inside an element are eliminated before anything reaches the sparse solver, and recovered afterwards
// (R.J. Guyan, AIAA J. 3 (1965) 380).

/** An element condensed onto its outer dofs. */
export interface CondensedElement {
  /** Square, row by row, outer x outer. */
  readonly matrix: Float64Array
  /** Lower Cholesky factor of the inner block, inner x inner, row by row. */
  readonly factor: Float64Array
  /** factor^-1 times the block that couples inner (rows) with outer dofs (columns), inner x outer, row by row. */
  readonly coupling: Float64Array
}

/**
 * Eliminates the dofs from `outer` on: S = Koo - W^T W, W = L^-1 Kio, L L^T = Kii.
 * @param stiffness square, row by row; @param size its order; @param outer the number of leading dofs that stay
 */
export function condense(stiffness: Float64Array, size: number, outer: number): CondensedElement {
  const inner = size - outer
  const factor = new Float64Array(inner * inner)
  const coupling = new Float64Array(inner * outer)
  for (let i = 0; i < inner; i++) {
    const from = (outer + i) * size
    factor.set(stiffness.subarray(from + outer, from + outer + i + 1), i * inner)
    coupling.set(stiffness.subarray(from, from + outer), i * outer)
  }
  factoriseSmall(factor, inner)
  for (let i = 0; i < inner; i++) {
    const row = i * outer
    let k = 0
    for (; k + 1 < i; k += 2) {
      subtractRows(coupling, row, coupling, k * outer, factor[i * inner + k], (k + 1) * outer, factor[i * inner + k + 1], outer)
    }
    if (k < i) subtractRow(coupling, row, coupling, k * outer, factor[i * inner + k], outer)
    const pivot = 1 / factor[i * inner + i]
    for (let j = 0; j < outer; j++) coupling[row + j] *= pivot
  }
  const matrix = new Float64Array(outer * outer)
  for (let i = 0; i < outer; i++) {
    const row = i * outer
    matrix.set(stiffness.subarray(i * size, i * size + i + 1), row)
    let k = 0
    for (; k + 1 < inner; k += 2) {
      subtractRows(matrix, row, coupling, k * outer, coupling[k * outer + i], (k + 1) * outer, coupling[(k + 1) * outer + i], i + 1)
    }
    if (k < inner) subtractRow(matrix, row, coupling, k * outer, coupling[k * outer + i], i + 1)
    for (let j = 0; j < i; j++) matrix[j * outer + i] = matrix[row + j]
  }
  return { matrix, factor, coupling }
}

/** In-place lower Cholesky factor of a small dense matrix, row by row. */
function factoriseSmall(matrix: Float64Array, n: number): void {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i * n + j]
      for (let k = 0; k < j; k++) sum -= matrix[i * n + k] * matrix[j * n + k]
      matrix[i * n + j] = i === j ? Math.sqrt(sum) : sum / matrix[j * n + j]
    }
  }
}

/** In place: the row of `array` at `to` minus c times the row of `other` at `from`. */
function subtractRow(array: Float64Array, to: number, other: Float64Array, from: number, c: number, length: number): void {
  for (let j = 0; j < length; j++) array[to + j] -= c * other[from + j]
}

/** The same with two rows at once: one load and store of the row for both. */
function subtractRows(
  array: Float64Array, to: number, other: Float64Array, a: number, ca: number, b: number, cb: number, length: number
): void {
  for (let j = 0; j < length; j++) array[to + j] -= ca * other[a + j] + cb * other[b + j]
}

/** Inner amplitudes that belong to the outer ones (no load inside): ui = -L^-T W uo. */
export function recoverInner({ factor, coupling }: CondensedElement, outer: Float64Array): Float64Array {
  const n = outer.length
  const inner = coupling.length / n
  const u = new Float64Array(inner)
  for (let i = 0; i < inner; i++) {
    let sum = 0
    for (let j = 0; j < n; j++) sum -= coupling[i * n + j] * outer[j]
    u[i] = sum
  }
  for (let i = inner - 1; i >= 0; i--) {
    let sum = u[i]
    for (let k = i + 1; k < inner; k++) sum -= factor[k * inner + i] * u[k]
    u[i] = sum / factor[i * inner + i]
  }
  return u
}

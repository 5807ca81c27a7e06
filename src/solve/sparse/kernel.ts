// Dense blocks: the elimination of a front's pivots. A front of n rows, p of them pivots, is kept in two pieces:
//   panel   n x p, row by row with stride p: what becomes L. Of its first p rows the lower triangle is used.
//   update  the lower triangle of the other n - p rows and columns, row by row without gaps: row i from i (i + 1) / 2.
// The diagonal of L is kept as its reciprocals, so nothing divides but p times a front.
//
// Every entry is its old value less a dot product of two rows of L, so both operands run along memory; three rows by three columns
// at a time keep nine sums in registers (five times the speed of one sum at a time). Cost: n^2 + (n - 1)^2 + ... of p terms.

const TILE = 3

/**
 * In place: panel (in `lower` from `at`) and update (in `stack` from `top`) of an assembled front become its columns of L and
 * its Schur complement. Row i of the pivots must leave more than least[leastAt + i] of its diagonal.
 * Returns the first row that does not, -1 when all do.
 */
export function eliminateFront(
  lower: Float64Array,
  at: number,
  n: number,
  p: number,
  stack: Float64Array,
  top: number,
  least: Float64Array,
  leastAt: number
): number {
  const tiled = p - (p % TILE)
  for (let i = 0; i < tiled; i += TILE) {
    for (let j = 0; j < i; j += TILE) solveTile(lower, at + i * p, at + j * p, p, j)
    for (let k = i; k < i + TILE; k++) if (!eliminateRow(lower, at, p, k, i, least[leastAt + k])) return k
  }
  for (let i = tiled; i < p; i++) if (!eliminateRow(lower, at, p, i, 0, least[leastAt + i])) return i

  let i = p
  for (; i + TILE <= n; i += TILE) {
    const a = at + i * p
    for (let j = 0; j < tiled; j += TILE) solveTile(lower, a, at + j * p, p, j)
    for (let j = tiled; j < p; j++) solveColumn(lower, a, at + j * p, p, j)
    const r = i - p
    const c0 = top + (r * (r + 1)) / 2
    const c1 = c0 + r + 1
    const c2 = c1 + r + 2
    for (let q = 0; q < r; q += TILE) subtractTile(lower, a, at + (p + q) * p, p, stack, c0 + q, c1 + q, c2 + q)
    subtractCorner(lower, a, p, stack, c0 + r, c1 + r, c2 + r)
  }
  for (; i < n; i++) {
    const a = at + i * p
    for (let j = 0; j < p; j++) lower[a + j] = (lower[a + j] - dot(lower, a, at + j * p, j)) * lower[at + j * p + j]
    const r = i - p
    const c = top + (r * (r + 1)) / 2
    for (let q = 0; q <= r; q++) stack[c + q] -= dot(lower, a, at + (p + q) * p, p)
  }
  return -1
}

/** Row i of the pivots from column `from` on, and its diagonal; false when too little of that is left. */
function eliminateRow(lower: Float64Array, at: number, p: number, i: number, from: number, least: number): boolean {
  const a = at + i * p
  for (let j = from; j < i; j++) lower[a + j] = (lower[a + j] - dot(lower, a, at + j * p, j)) * lower[at + j * p + j]
  const pivot = lower[a + i] - dot(lower, a, a, i)
  if (!(pivot > least)) return false
  lower[a + i] = 1 / Math.sqrt(pivot)
  return true
}

function dot(x: Float64Array, a: number, b: number, count: number): number {
  let s0 = 0
  let s1 = 0
  let k = 0
  for (; k + 1 < count; k += 2) {
    s0 += x[a + k] * x[b + k]
    s1 += x[a + k + 1] * x[b + k + 1]
  }
  if (k < count) s0 += x[a + k] * x[b + k]
  return s0 + s1
}

/** Rows a, a + p, a + 2p of L in columns j to j + 2, whose own rows begin at b: solves with the columns before j done. */
function solveTile(x: Float64Array, a: number, b: number, p: number, j: number): void {
  const a1 = a + p
  const a2 = a1 + p
  const b1 = b + p
  const b2 = b1 + p
  let s00 = 0
  let s01 = 0
  let s02 = 0
  let s10 = 0
  let s11 = 0
  let s12 = 0
  let s20 = 0
  let s21 = 0
  let s22 = 0
  for (let k = 0; k < j; k++) {
    const u = x[a + k]
    const v = x[a1 + k]
    const w = x[a2 + k]
    let y = x[b + k]
    s00 += u * y
    s10 += v * y
    s20 += w * y
    y = x[b1 + k]
    s01 += u * y
    s11 += v * y
    s21 += w * y
    y = x[b2 + k]
    s02 += u * y
    s12 += v * y
    s22 += w * y
  }
  const d0 = x[b + j]
  const l10 = x[b1 + j]
  const d1 = x[b1 + j + 1]
  const l20 = x[b2 + j]
  const l21 = x[b2 + j + 1]
  const d2 = x[b2 + j + 2]
  s00 = (x[a + j] - s00) * d0
  s10 = (x[a1 + j] - s10) * d0
  s20 = (x[a2 + j] - s20) * d0
  s01 = (x[a + j + 1] - s01 - s00 * l10) * d1
  s11 = (x[a1 + j + 1] - s11 - s10 * l10) * d1
  s21 = (x[a2 + j + 1] - s21 - s20 * l10) * d1
  x[a + j] = s00
  x[a1 + j] = s10
  x[a2 + j] = s20
  x[a + j + 1] = s01
  x[a1 + j + 1] = s11
  x[a2 + j + 1] = s21
  x[a + j + 2] = (x[a + j + 2] - s02 - s00 * l20 - s01 * l21) * d2
  x[a1 + j + 2] = (x[a1 + j + 2] - s12 - s10 * l20 - s11 * l21) * d2
  x[a2 + j + 2] = (x[a2 + j + 2] - s22 - s20 * l20 - s21 * l21) * d2
}

/** The same of one column j. */
function solveColumn(x: Float64Array, a: number, b: number, p: number, j: number): void {
  const a1 = a + p
  const a2 = a1 + p
  let s0 = 0
  let s1 = 0
  let s2 = 0
  for (let k = 0; k < j; k++) {
    const y = x[b + k]
    s0 += x[a + k] * y
    s1 += x[a1 + k] * y
    s2 += x[a2 + k] * y
  }
  const d = x[b + j]
  x[a + j] = (x[a + j] - s0) * d
  x[a1 + j] = (x[a1 + j] - s1) * d
  x[a2 + j] = (x[a2 + j] - s2) * d
}

/** Update entries c0, c1, c2 and the two after each, less the products of rows a, a + p, a + 2p with rows b, b + p, b + 2p of L. */
function subtractTile(x: Float64Array, a: number, b: number, p: number, y: Float64Array, c0: number, c1: number, c2: number): void {
  const a1 = a + p
  const a2 = a1 + p
  const b1 = b + p
  const b2 = b1 + p
  let s00 = 0
  let s01 = 0
  let s02 = 0
  let s10 = 0
  let s11 = 0
  let s12 = 0
  let s20 = 0
  let s21 = 0
  let s22 = 0
  for (let k = 0; k < p; k++) {
    const u = x[a + k]
    const v = x[a1 + k]
    const w = x[a2 + k]
    let z = x[b + k]
    s00 += u * z
    s10 += v * z
    s20 += w * z
    z = x[b1 + k]
    s01 += u * z
    s11 += v * z
    s21 += w * z
    z = x[b2 + k]
    s02 += u * z
    s12 += v * z
    s22 += w * z
  }
  y[c0] -= s00
  y[c0 + 1] -= s01
  y[c0 + 2] -= s02
  y[c1] -= s10
  y[c1 + 1] -= s11
  y[c1 + 2] -= s12
  y[c2] -= s20
  y[c2 + 1] -= s21
  y[c2 + 2] -= s22
}

/** The triangle on the diagonal, the same rows with themselves: entry c0, c1 and the next, c2 and the next two. */
function subtractCorner(x: Float64Array, a: number, p: number, y: Float64Array, c0: number, c1: number, c2: number): void {
  const a1 = a + p
  const a2 = a1 + p
  let s00 = 0
  let s10 = 0
  let s11 = 0
  let s20 = 0
  let s21 = 0
  let s22 = 0
  for (let k = 0; k < p; k++) {
    const u = x[a + k]
    const v = x[a1 + k]
    const w = x[a2 + k]
    s00 += u * u
    s10 += v * u
    s11 += v * v
    s20 += w * u
    s21 += w * v
    s22 += w * w
  }
  y[c0] -= s00
  y[c1] -= s10
  y[c1 + 1] -= s11
  y[c2] -= s20
  y[c2 + 1] -= s21
  y[c2 + 2] -= s22
}

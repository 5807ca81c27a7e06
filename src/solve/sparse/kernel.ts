// Dense blocks of the factorisation: fronts are square, row by row, lower triangle used.

/**
 * In place: the first `pivots` columns of the lower triangle of an n x n front become those of its Cholesky factor, and the
 * rest becomes the Schur complement. Returns the first row whose pivot is not above `least[row]`, -1 when all are.
 * Dot products along rows, two rows by two at a time (cost: pivots n^2 multiplications, less pivots^2 n / 3 and so on).
 */
export function factoriseFront(front: Float64Array, n: number, pivots: number, least: Float64Array): number {
  for (let i = 0; i < n; i++) {
    const row = i * n
    const width = i < pivots ? i : pivots
    for (let j = 0; j < width; j++) {
      front[row + j] = (front[row + j] - dot(front, row, j * n, j)) / front[j * n + j]
    }
    if (i >= pivots) continue
    const pivot = front[row + i] - dot(front, row, row, i)
    if (!(pivot > least[i])) return i
    front[row + i] = Math.sqrt(pivot)
  }
  subtractProducts(front, n, pivots)
  return -1
}

function dot(a: Float64Array, from: number, to: number, count: number): number {
  let s0 = 0
  let s1 = 0
  let k = 0
  for (; k + 1 < count; k += 2) {
    s0 += a[from + k] * a[to + k]
    s1 += a[from + k + 1] * a[to + k + 1]
  }
  if (k < count) s0 += a[from + k] * a[to + k]
  return s0 + s1
}

/** Schur complement: front[i][j] -= sum over k < pivots of front[i][k] front[j][k] for pivots <= j <= i. */
function subtractProducts(front: Float64Array, n: number, pivots: number): void {
  let i = pivots
  for (; i + 1 < n; i += 2) {
    for (let j = pivots; j <= i; j += 2) subtractTile(front, n, pivots, i, j)
  }
  if (i < n) {
    for (let j = pivots; j <= i; j++) front[i * n + j] -= dot(front, i * n, j * n, pivots)
  }
}

/** Two rows i, i + 1 by two columns j, j + 1 (an entry above the diagonal is written and never read). */
function subtractTile(front: Float64Array, n: number, pivots: number, i: number, j: number): void {
  const a0 = i * n
  const a1 = a0 + n
  const b0 = j * n
  const b1 = b0 + n
  let s00 = 0
  let s01 = 0
  let s10 = 0
  let s11 = 0
  for (let k = 0; k < pivots; k++) {
    const x0 = front[a0 + k]
    const x1 = front[a1 + k]
    const y0 = front[b0 + k]
    const y1 = front[b1 + k]
    s00 += x0 * y0
    s01 += x0 * y1
    s10 += x1 * y0
    s11 += x1 * y1
  }
  front[a0 + j] -= s00
  front[a0 + j + 1] -= s01
  front[a1 + j] -= s10
  front[a1 + j + 1] -= s11
}

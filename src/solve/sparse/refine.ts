// Iterative refinement (J.H. Wilkinson, Rounding Errors in Algebraic Processes, 1963): the factor's answer is improved by the
// factor's answer to its own residual.

import { solveFactor, type Factor, type Symbolic } from './cholesky.ts'

export interface Refined {
  readonly x: Float64Array
  /** |Kx - f| / (|K| |x| + |f|), maximum norms, over the dofs that are not fixed. */
  readonly residual: number
  /** Corrections that were tried, the last of which may not have been taken. */
  readonly steps: number
}

const MOST_STEPS = 5

/**
 * Solution of K x = f with x = 0 at the fixed dofs, refined until the residual is not above `limit` or no longer falls.
 * K is the sum of the element matrices that were factorised, one a clique.
 */
export function solveRefined(
  symbolic: Symbolic,
  elements: readonly Float64Array[],
  fixed: Uint8Array,
  factor: Factor,
  load: Float64Array,
  { limit = 0 }: { limit?: number } = {}
): Refined {
  const f = load.map((force, dof) => (fixed[dof] ? 0 : force))
  const size = maximum(f)
  if (size === 0) return { x: new Float64Array(symbolic.n), residual: 0, steps: 0 }
  const norm = rowSumNorm(symbolic, elements)
  const evaluate = (x: Float64Array) => {
    const r = subtractProduct(symbolic, elements, fixed, f, x)
    return { x, r, residual: maximum(r) / (norm * maximum(x) + size) }
  }
  let best = evaluate(solveFactor(factor, f))
  let steps = 0
  while (steps < MOST_STEPS && best.residual > limit) {
    const change = solveFactor(factor, best.r)
    const next = evaluate(best.x.map((displacement, dof) => displacement + change[dof]))
    steps++
    if (!(next.residual < 0.5 * best.residual)) break
    best = next
  }
  return { x: best.x, residual: best.residual, steps }
}

/** f - K x at the dofs that are not fixed, 0 at the others. */
function subtractProduct(
  { cliqueDofStart, cliqueDof }: Symbolic,
  elements: readonly Float64Array[],
  fixed: Uint8Array,
  f: Float64Array,
  x: Float64Array
): Float64Array {
  const r = f.slice()
  for (let e = 0; e < elements.length; e++) {
    const from = cliqueDofStart[e]
    subtractElement(elements[e], cliqueDof, from, cliqueDofStart[e + 1] - from, x, r)
  }
  for (let dof = 0; dof < r.length; dof++) if (fixed[dof]) r[dof] = 0
  return r
}

/** In place: r less the product of one element matrix (n x n, its dofs in `dofs` from `from`) with x. */
function subtractElement(matrix: Float64Array, dofs: Int32Array, from: number, n: number, x: Float64Array, r: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let sum = 0
    for (let j = 0; j < n; j++) sum += matrix[i * n + j] * x[dofs[from + j]]
    r[dofs[from + i]] -= sum
  }
}

/** An upper bound of the maximum row sum: the element matrices' absolute row sums, added. */
function rowSumNorm({ n, cliqueDofStart, cliqueDof }: Symbolic, elements: readonly Float64Array[]): number {
  const sums = new Float64Array(n)
  for (let e = 0; e < elements.length; e++) {
    const from = cliqueDofStart[e]
    const size = cliqueDofStart[e + 1] - from
    const matrix = elements[e]
    for (let i = 0; i < size; i++) {
      let sum = 0
      for (let j = 0; j < size; j++) sum += Math.abs(matrix[i * size + j])
      sums[cliqueDof[from + i]] += sum
    }
  }
  return maximum(sums)
}

function maximum(array: Float64Array): number {
  let largest = 0
  for (const entry of array) largest = Math.max(largest, Math.abs(entry))
  return largest
}

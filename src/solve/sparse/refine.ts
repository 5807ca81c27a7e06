// Iterative refinement (J.H. Wilkinson, 1963): the factor's answer is improved by the factor's answer to its own residual.

import { solveFactor, type Factor, type Symbolic } from './cholesky.ts'

export interface Refined {
  readonly x: Float64Array
  /** |Kx - f| / (|K| |x| + |f|), maximum norms, over the dofs that are not fixed. */
  readonly residual: number
  readonly steps: number
}

const MOST_STEPS = 5

/** Solution of K x = f with x = 0 at the fixed dofs, refined until the residual no longer falls. */
export function solveRefined(
  symbolic: Symbolic,
  elements: readonly Float64Array[],
  fixed: Uint8Array,
  factor: Factor,
  load: Float64Array
): Refined {
  const f = load.map((value, dof) => (fixed[dof] ? 0 : value))
  const norm = rowSumNorm(symbolic, elements)
  const size = maximum(f)
  const evaluate = (x: Float64Array) => {
    const r = subtractProduct(symbolic, elements, fixed, f, x)
    return { x, r, residual: size === 0 ? 0 : maximum(r) / (norm * maximum(x) + size) }
  }
  let best = evaluate(solveFactor(factor, f))
  let steps = 0
  while (steps < MOST_STEPS) {
    const change = solveFactor(factor, best.r)
    const next = evaluate(best.x.map((value, dof) => value + change[dof]))
    steps++
    if (!(next.residual < 0.5 * best.residual)) break
    best = next
  }
  return { x: best.x, residual: best.residual, steps }
}

/** f - K x at the dofs that are not fixed, 0 at the others. */
function subtractProduct(
  { cliqueDofs }: Symbolic,
  elements: readonly Float64Array[],
  fixed: Uint8Array,
  f: Float64Array,
  x: Float64Array
): Float64Array {
  const r = f.slice()
  elements.forEach((matrix, e) => {
    const dofs = cliqueDofs[e]
    const n = dofs.length
    for (let i = 0; i < n; i++) {
      let sum = 0
      for (let j = 0; j < n; j++) sum += matrix[i * n + j] * x[dofs[j]]
      r[dofs[i]] -= sum
    }
  })
  fixed.forEach((held, dof) => {
    if (held) r[dof] = 0
  })
  return r
}

/** An upper bound of the maximum row sum: the element matrices' absolute row sums, added. */
function rowSumNorm({ n, cliqueDofs }: Symbolic, elements: readonly Float64Array[]): number {
  const sums = new Float64Array(n)
  elements.forEach((matrix, e) => {
    const dofs = cliqueDofs[e]
    for (let i = 0; i < dofs.length; i++) {
      for (let j = 0; j < dofs.length; j++) sums[dofs[i]] += Math.abs(matrix[i * dofs.length + j])
    }
  })
  return maximum(sums)
}

function maximum(array: Float64Array): number {
  let largest = 0
  for (const value of array) largest = Math.max(largest, Math.abs(value))
  return largest
}

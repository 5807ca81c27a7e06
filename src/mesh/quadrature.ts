// Gauss-Legendre quadrature on [-1, 1], its product on the square, and the collapsed product rule on the reference triangle.

/** Nodes and weights of a rule; on the triangle and the square `point` holds (xi, eta) a node. */
export interface Rule {
  readonly point: Float64Array
  readonly weight: Float64Array
}

/**
 * Gauss-Legendre rule with n nodes on [-1, 1], ascending, exact for degree 2n - 1.
 * Newton's method on P_n from Chebyshev-like starts (P.J. Davis, P. Rabinowitz, Methods of Numerical Integration, 2.7).
 */
export function gaussLegendre(n: number): Rule {
  const point = new Float64Array(n)
  const weight = new Float64Array(n)
  for (let i = 0; i < n; i++) {
    let x = -Math.cos((Math.PI * (i + 0.75)) / (n + 0.5))
    let slope = 1
    for (let step = 0; step < 100; step++) {
      let p = 1
      let before = 0
      for (let k = 1; k <= n; k++) {
        const next = ((2 * k - 1) * x * p - (k - 1) * before) / k
        before = p
        p = next
      }
      slope = (n * (x * p - before)) / (x * x - 1)
      const change = p / slope
      x -= change
      if (Math.abs(change) < 1e-15) break
    }
    point[i] = x
    weight[i] = 2 / ((1 - x * x) * slope * slope)
  }
  return { point, weight }
}

/**
 * Collapsed (Duffy) rule with n x n nodes on the reference triangle, exact for total degree 2n - 2; weights sum to 1/2.
 */
export function triangleRule(n: number): Rule {
  const line = gaussLegendre(n)
  const point = new Float64Array(2 * n * n)
  const weight = new Float64Array(n * n)
  let at = 0
  for (let j = 0; j < n; j++) {
    const eta = (1 + line.point[j]) / 2
    for (let i = 0; i < n; i++) {
      point[2 * at] = ((1 + line.point[i]) / 2) * (1 - eta)
      point[2 * at + 1] = eta
      weight[at++] = (line.weight[i] * line.weight[j] * (1 - eta)) / 4
    }
  }
  return { point, weight }
}

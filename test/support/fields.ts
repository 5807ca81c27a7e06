// Exact stress fields of plane elasticity, the tractions that they put on edges, and how far a solution is from them.

import type { Traction } from '../../src/case/plate.ts'
import { elementCount, nodesOf } from '../../src/mesh/mesh.ts'
import { FIELD, fieldSampler, type Sampler, type Solution } from '../../src/solve/field.ts'

export type Stress = [sxx: number, syy: number, sxy: number]
export type StressField = (x: number, y: number) => Stress

/** The tractions that an exact stress field puts on an edge. */
export function tractionOf(field: StressField): Traction {
  return ([x, y], [nx, ny]) => {
    const [sxx, syy, sxy] = field(x, y)
    return [sxx * nx + sxy * ny, sxy * nx + syy * ny]
  }
}

/** Polar components at the angle theta as sxx, syy, sxy. */
function fromPolar(sr: number, st: number, trt: number, theta: number): Stress {
  const [c, s] = [Math.cos(theta), Math.sin(theta)]
  return [sr * c * c + st * s * s - 2 * trt * s * c, sr * s * s + st * c * c + 2 * trt * s * c, (sr - st) * s * c + trt * (c * c - s * s)]
}

/** Pull S = 1 along x on an endless plate with a hole of radius 1 (G. Kirsch, Z. VDI 42 (1898) 797). */
export const kirsch: StressField = (x, y) => {
  const a = 1 / (x * x + y * y)
  const theta = Math.atan2(y, x)
  const [c2, s2] = [Math.cos(2 * theta), Math.sin(2 * theta)]
  const sr = (1 - a) / 2 + ((1 - 4 * a + 3 * a * a) / 2) * c2
  const st = (1 + a) / 2 - ((1 + 3 * a * a) / 2) * c2
  return fromPolar(sr, st, -((1 + 2 * a - 3 * a * a) / 2) * s2, theta)
}

/** Ring 1 <= r <= 2 under internal pressure 1: s = p a^2 / (b^2 - a^2) (1 -+ b^2 / r^2) (G. Lame, 1852). */
export const lame: StressField = (x, y) => {
  const r2 = x * x + y * y
  return fromPolar((1 - 4 / r2) / 3, (1 + 4 / r2) / 3, 0, Math.atan2(y, x))
}

/**
 * Ring a = 1 <= r <= b = 2 bent by equal moments M = 1 (thickness 1) that open it (H. Golovin, 1881; S. Timoshenko, J.N. Goodier, Theory of
 * Elasticity, art. 29, from memory).
 */
export const curvedBar: StressField = (x, y) => {
  const [a, b] = [1, 2]
  const r = Math.hypot(x, y)
  const log = Math.log(b / a)
  const n = (b * b - a * a) ** 2 - 4 * a * a * b * b * log * log
  const sum = b * b * Math.log(r / b) + a * a * Math.log(a / r)
  const inverse = ((a * a * b * b) / (r * r)) * log
  return fromPolar((-4 / n) * (inverse + sum), (-4 / n) * (sum - inverse + b * b - a * a), 0, Math.atan2(y, x))
}

type Complex = readonly [re: number, im: number]
const times = ([a, b]: Complex, [c, d]: Complex): Complex => [a * c - b * d, a * d + b * c]
const over = ([a, b]: Complex, [c, d]: Complex): Complex => [(a * c + b * d) / (c * c + d * d), (b * c - a * d) / (c * c + d * d)]
const plus = ([a, b]: Complex, [c, d]: Complex): Complex => [a + c, b + d]
const scaled = (k: number, [a, b]: Complex): Complex => [k * a, k * b]

/**
 * Pull S = 1 along y on an endless plate with an elliptical hole of semi-axes a (along x) and b (C.E. Inglis, Trans. Inst. Nav. Archit. 55 (1913)
 * 219). With z = R (w + m / w), |w| >= 1, and the potentials of N.I. Muskhelishvili (Some Basic Problems of the Mathematical Theory of
 * Elasticity, par. 82a, from memory; a test sees that the hole's edge is free and the far field S):
 * phi = R / 4 (w - (2 + m) / w), psi = R / 2 (w + 1 / (m w) - (1 + m^2)(1 + m) / m  w / (w^2 - m)); a unlike b.
 */
export function inglis(a: number, b: number): StressField {
  const size = (a + b) / 2
  const m = (a - b) / (a + b)
  return (x, y) => {
    const w = outsideRoot([x / size, y / size], m)
    const one: Complex = [1, 0]
    const w2 = times(w, w)
    const inverse2 = over(one, w2)
    // derivatives by w
    const z1 = scaled(size, plus(one, scaled(-m, inverse2)))
    const z2 = scaled(2 * m * size, over(one, times(w2, w)))
    const phi1 = scaled(size / 4, plus(one, scaled(2 + m, inverse2)))
    const phi2 = scaled((-size / 2) * (2 + m), over(one, times(w2, w)))
    const pole = plus(w2, [-m, 0])
    const bracket = scaled(((1 + m * m) * (1 + m)) / m, over(plus(w2, [m, 0]), times(pole, pole)))
    const psi1 = scaled(size / 2, plus(plus(one, scaled(-1 / m, inverse2)), bracket))
    const big = over(phi1, z1)
    const bigSlope = over(plus(times(phi2, z1), scaled(-1, times(phi1, z2))), times(times(z1, z1), z1))
    const sum = 4 * big[0]
    const [difference, twice] = scaled(2, plus(times([x, -y], bigSlope), over(psi1, z1)))
    return [(sum - difference) / 2, (sum + difference) / 2, twice / 2]
  }
}

/** The root of w + m / w = z that lies outside the unit circle. */
function outsideRoot(z: Complex, m: number): Complex {
  const [re, im] = plus(times(z, z), [-4 * m, 0])
  const length = Math.hypot(re, im)
  const root: Complex = [Math.sqrt((length + re) / 2), Math.sign(im || 1) * Math.sqrt(Math.max(0, (length - re) / 2))]
  const candidates = [scaled(0.5, plus(z, root)), scaled(0.5, plus(z, scaled(-1, root)))]
  return candidates.reduce((p, q) => (Math.hypot(...q) > Math.hypot(...p) ? q : p))
}

/** Largest difference of any stress component from the exact field, at points inside every element. */
export function worstStress(solution: Solution, exact: StressField, sample: Sampler = fieldSampler(solution)): number {
  const inTriangle = Float64Array.of(1 / 3, 1 / 3, 0.1, 0.1, 0.8, 0.1, 0.1, 0.8, 0.45, 0.45, 0.02, 0.5)
  const inQuad = Float64Array.of(0, 0, -0.7, -0.7, 0.7, -0.7, 0.7, 0.7, -0.7, 0.7, 0.3, 0.95)
  let worst = 0
  for (let element = 0; element < elementCount(solution.mesh); element++) {
    const field = sample(element, nodesOf(solution.mesh, element).length === 3 ? inTriangle : inQuad)
    for (let q = 0; q < field.length; q += FIELD) {
      exact(field[q], field[q + 1]).forEach((s, c) => (worst = Math.max(worst, Math.abs(s - field[q + 4 + c]))))
    }
  }
  return worst
}

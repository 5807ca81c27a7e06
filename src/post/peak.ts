// The largest edge stress of a stress raiser, to the point: the edge stress is maximised inside every boundary side, not read
// at nodes, between which the peak of a coarse mesh lies.

import { outwardNormal, pointOn, type Point } from '../case/plate.ts'
import { edgeUnder } from '../mesh/mesh.ts'
import { edgeStress, fieldSampler, FIELD, sideReference, type Solution } from '../solve/field.ts'

/** The tangential stress of largest magnitude on some edges (plate stress units, signed), and where it is. */
export interface EdgePeak {
  readonly stress: number
  readonly at: Point
  readonly loop: number
  readonly edge: number
  /** Parameter on the edge's curve. */
  readonly t: number
  /** Where on its boundary side: at its beginning (-1), its end (1) or between them (0). */
  readonly end: -1 | 0 | 1
}

/** Golden-section steps that shrink the interval between two samples to 1e-8 of itself. */
const GOLDEN_STEPS = 38

/** Largest |edge stress| of each of the given boundary sides, in their order. */
export function sidePeaks(solution: Solution, sides: readonly number[]): EdgePeak[] {
  return sides.map((b) => sidePeak(solution, b))
}

function sidePeak(solution: Solution, b: number): EdgePeak {
  const { plate, mesh, order } = solution
  const samples = 3 * order + 1
  const s = Float64Array.from({ length: samples }, (_, i) => (2 * i) / (samples - 1) - 1)
  const stress = edgeStress(solution, b, s)
  let top = 0
  stress.forEach((value, i) => {
    if (Math.abs(value) > Math.abs(stress[top])) top = i
  })
  const magnitude = (x: number) => Math.abs(edgeStress(solution, b, [x])[0])
  let best = s[top]
  const found = maximise(magnitude, s[Math.max(0, top - 1)], s[Math.min(samples - 1, top + 1)])
  if (magnitude(found) > Math.abs(stress[top])) best = found
  const [t0, t1] = [mesh.boundary.span[2 * b], mesh.boundary.span[2 * b + 1]]
  const t = best === 1 ? t1 : best === -1 ? t0 : t0 + ((t1 - t0) * (1 + best)) / 2
  return {
    stress: edgeStress(solution, b, [best])[0],
    at: pointOn(edgeUnder(plate, mesh, b).curve, t),
    loop: mesh.boundary.loop[b],
    edge: mesh.boundary.edge[b],
    t,
    end: best === 1 ? 1 : best === -1 ? -1 : 0
  }
}

/** Golden-section search (J. Kiefer, Proc. AMS 4 (1953) 502) for the maximum of a function with one hump. */
function maximise(f: (x: number) => number, from: number, to: number): number {
  const ratio = (Math.sqrt(5) - 1) / 2
  let [a, b] = [from, to]
  let [x1, x2] = [b - ratio * (b - a), a + ratio * (b - a)]
  let [f1, f2] = [f(x1), f(x2)]
  for (let step = 0; step < GOLDEN_STEPS; step++) {
    if (f1 >= f2) {
      ;[b, x2, f2] = [x2, x1, f1]
      x1 = b - ratio * (b - a)
      f1 = f(x1)
    } else {
      ;[a, x1, f1] = [x1, x2, f2]
      x2 = a + ratio * (b - a)
      f2 = f(x2)
    }
  }
  return (a + b) / 2
}

/**
 * The one of several peaks that counts: the largest magnitude; magnitudes within `tie` (relative) of it are equal, and then
 * the tensile one, the larger y, the smaller x is taken.
 */
export function foremost<T extends { stress: number; at: Point }>(peaks: readonly T[], tie: number): T {
  const largest = Math.max(...peaks.map(({ stress }) => Math.abs(stress)))
  const equals = peaks.filter(({ stress }) => Math.abs(stress) >= largest * (1 - tie))
  return equals.reduce((best, peak) => (before(peak, best) ? peak : best))
}

function before(a: { stress: number; at: Point }, b: { stress: number; at: Point }): boolean {
  if (a.stress > 0 !== b.stress > 0) return a.stress > 0
  if (a.at[1] !== b.at[1]) return a.at[1] > b.at[1]
  return a.at[0] < b.at[0]
}

/**
 * Largest |normal or shear stress| on those of the given boundary sides that are free, plate stress units: zero in the exact
 * solution, so what is left over tells how far the stress field is from it.
 */
export function freeEdgeResidual(solution: Solution, sides: readonly number[]): number {
  const { plate, mesh, order } = solution
  const sample = fieldSampler(solution)
  const samples = order + 2
  const s = Float64Array.from({ length: samples }, (_, i) => ((i + 0.5) * 2) / samples - 1)
  let largest = 0
  for (const b of sides) {
    const edge = edgeUnder(plate, mesh, b)
    if (edge.traction) continue
    const field = sample(mesh.boundary.element[b], sideReference(mesh, b, s))
    const [t0, t1] = [mesh.boundary.span[2 * b], mesh.boundary.span[2 * b + 1]]
    for (let q = 0; q < samples; q++) {
      const [sxx, syy, sxy] = field.subarray(FIELD * q + 4, FIELD * q + 7)
      const [nx, ny] = outwardNormal(edge.curve, t0 + ((t1 - t0) * (1 + s[q])) / 2)
      largest = Math.max(largest, Math.hypot(sxx * nx + sxy * ny, sxy * nx + syy * ny))
    }
  }
  return largest
}

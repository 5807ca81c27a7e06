// What one solve says about every stress raiser: its peak, and the stress left over on the free edge there.

import { derivativeOn, type Plate } from '../case/plate.ts'
import { edgeUnder, type Mesh } from '../mesh/mesh.ts'
import { dofMap } from '../solve/dofs.ts'
import { edgeStress, type Solution } from '../solve/field.ts'
import { freeEdgeResidual, sidePeaks, type EdgePeak } from './peak.ts'

/** One solve: mesh counted from 1, order, all unknowns, and a reading of each raiser (null where it is sharp). */
export interface Pass {
  readonly mesh: number
  readonly order: number
  readonly dof: number
  readonly raisers: readonly (Reading | null)[]
}

/** Plate stress units. */
export interface Reading {
  /** |peak|: the largest edge stress of the raiser. */
  readonly magnitude: number
  /** The local peaks: the largest edge stress of each boundary side that no side next to it exceeds. */
  readonly peaks: readonly EdgePeak[]
  /** Largest |normal or shear stress| on the free sides at the peak and beside it. */
  readonly leftOver: number
  /** Largest |step| of the edge stress at the ends of the side with the peak: zero in truth where the edge is smooth. */
  readonly step: number
}

/** Reads every raiser of a solution on mesh number `mesh`. */
export function readRaisers(solution: Solution, mesh: number): Pass {
  const { plate, order } = solution
  return {
    mesh,
    order,
    dof: dofMap(solution.mesh, order).all,
    raisers: plate.raisers.map((raiser, index) => (raiser.sharp === null ? readRaiser(solution, index) : null))
  }
}

function readRaiser(solution: Solution, raiser: number): Reading {
  const { plate, mesh, order } = solution
  const own = boundarySidesOf(plate, mesh, raiser)
  const place = new Map(own.map((b, i) => [b, i]))
  const before = own.map((b) => place.get(neighbour(mesh, b, -1)) ?? -1)
  const after = own.map((b) => place.get(neighbour(mesh, b, 1)) ?? -1)
  const found = sidePeaks(solution, own)
  const sides = order > JOINED_FROM ? joinEnds(solution, own, found, before, after) : found
  const size = sides.map(({ stress }) => Math.abs(stress))
  const besides = (i: number) => [before[i], after[i]].filter((n) => n >= 0)
  const peaks = sides.filter((_, i) => besides(i).every((n) => size[i] >= size[n]))
  const magnitude = Math.max(...size)
  const top = size.indexOf(magnitude)
  const near = [top, ...besides(top)].map((i) => own[i])
  return { magnitude, peaks, leftOver: freeEdgeResidual(solution, near), step: Math.max(stepAt(solution, own[top], -1), stepAt(solution, own[top], 1)) }
}

/** |Step| of the edge stress at an end of boundary side b, 0 in a corner. */
function stepAt(solution: Solution, b: number, end: -1 | 1): number {
  const across = stressAcross(solution, b, end)
  return across === null ? 0 : Math.abs(across - edgeStress(solution, b, [end])[0])
}

/** Up to this order the edge stress of a side is constant or straight, and says nothing of a maximum near its end. */
const JOINED_FROM = 2

/**
 * The sides' peaks with the step between neighbours taken out. The true stress is continuous along a smooth edge, the elements' one steps
 * at their ends, and a side that ends near a tangent point overshoots there. So a peak at a side's end counts only where the
 * neighbour has its peak at the same vertex, and then as the mean of the two; else the neighbour says that the maximum lies elsewhere.
 * Where the raiser itself ends, the mean with the edge beyond it counts.
 */
function joinEnds(
  solution: Solution, own: readonly number[], sides: readonly EdgePeak[], before: readonly number[], after: readonly number[]
): EdgePeak[] {
  const joined = sides.map((side, i): EdgePeak => {
    if (side.end === 0) return side
    const other = side.end === 1 ? after[i] : before[i]
    if (other >= 0) {
      const counts = sides[other].end === -side.end
      return { ...side, stress: counts ? (side.stress + sides[other].stress) / 2 : 0 }
    }
    const across = stressAcross(solution, own[i], side.end)
    return across === null ? side : { ...side, stress: (side.stress + across) / 2 }
  })
  // where the stress is constant, every side may point to the next one
  return joined.some(({ stress }) => stress !== 0) ? joined : [...sides]
}

/** Cosine of the angle below which two sides meet in a corner. */
const SMOOTH = Math.cos(Math.PI / 180)

/** Edge stress at an end of boundary side b as the next side there has it; null where they meet in a corner. */
function stressAcross(solution: Solution, b: number, end: -1 | 0 | 1): number | null {
  const { plate, mesh } = solution
  const other = neighbour(mesh, b, end === 1 ? 1 : -1)
  const { span } = mesh.boundary
  const [t, u] = end === 1 ? [span[2 * b + 1], span[2 * other]] : [span[2 * b], span[2 * other + 1]]
  const [ax, ay] = derivativeOn(edgeUnder(plate, mesh, b).curve, t)
  const [bx, by] = derivativeOn(edgeUnder(plate, mesh, other).curve, u)
  if (ax * bx + ay * by < SMOOTH * Math.hypot(ax, ay) * Math.hypot(bx, by)) return null
  return edgeStress(solution, other, [-end])[0]
}

/** The boundary side before (-1) or after (+1) side b on its loop. */
function neighbour({ boundary: { count, loop } }: Mesh, b: number, step: -1 | 1): number {
  const next = b + step
  if (next >= 0 && next < count && loop[next] === loop[b]) return next
  // around the loop to its other end
  return step > 0 ? loop.indexOf(loop[b]) : loop.lastIndexOf(loop[b])
}

/** Boundary sides of a raiser (an index into `plate.raisers`), -1 for those of none. */
export function boundarySidesOf(plate: Plate, mesh: Mesh, raiser: number): number[] {
  const sides: number[] = []
  for (let b = 0; b < mesh.boundary.count; b++) if (edgeUnder(plate, mesh, b).raiser === raiser) sides.push(b)
  return sides
}

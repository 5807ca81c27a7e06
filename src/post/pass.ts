// What one solve says about every stress raiser: its peak, and the stress left over on the free edge there.

import type { Plate } from '../case/plate.ts'
import { edgeUnder, type Mesh } from '../mesh/mesh.ts'
import { dofMap } from '../solve/dofs.ts'
import type { Solution } from '../solve/field.ts'
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
  /** The largest edge stress of each of the raiser's boundary sides. */
  readonly sides: readonly EdgePeak[]
  /** Largest |normal or shear stress| on the free sides at the peak and beside it. */
  readonly leftOver: number
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
  const own = boundarySidesOf(solution.plate, solution.mesh, raiser)
  const sides = sidePeaks(solution, own)
  const magnitude = Math.max(...sides.map(({ stress }) => Math.abs(stress)))
  const top = sides.findIndex(({ stress }) => Math.abs(stress) === magnitude)
  const near = [own[(top + own.length - 1) % own.length], own[top], own[(top + 1) % own.length]]
  return { magnitude, sides, leftOver: freeEdgeResidual(solution, near) }
}

/** Boundary sides of a raiser (an index into `plate.raisers`), -1 for those of none. */
export function boundarySidesOf(plate: Plate, mesh: Mesh, raiser: number): number[] {
  const sides: number[] = []
  for (let b = 0; b < mesh.boundary.count; b++) if (edgeUnder(plate, mesh, b).raiser === raiser) sides.push(b)
  return sides
}

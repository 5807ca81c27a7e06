// A case in, its verdict out. This is the whole pipe on one screen: plate, mesh, displacements, peaks, error bars; and the only
// loop: while a bar is wider than the tolerance, raise the order, then refine near the raisers that are not settled.

import { buildPlate } from './case/build.ts'
import type { Plate } from './case/plate.ts'
import type { PlateCase } from './case/schema.ts'
import { meshPlate } from './mesh/build.ts'
import type { ElementKind, Mesh } from './mesh/mesh.ts'
import type { Fineness } from './mesh/size.ts'
import { barsOf, composeVerdict, unsettledRaisers } from './post/compose.ts'
import { readRaisers, type Pass } from './post/pass.ts'
import type { Verdict } from './post/verdict.ts'
import type { Solution } from './solve/field.ts'
import { solvePlate } from './solve/solve.ts'

export interface VerifyOptions {
  /** The case's name in the verdict's `file`. */
  readonly file: string
  /** Half-width wanted on every peak, relative; the case's own by default. */
  readonly tolerance?: number
  /** A fixed order: the loop refines the mesh only, twice at most from order 3 up. */
  readonly order?: number
  /** Kind of elements; quads along arcs and triangles elsewhere if left out. */
  readonly elements?: ElementKind
  /** Milliseconds, for the times in the verdict; without it they are 0. */
  readonly clock?: () => number
}

export interface Verification {
  readonly verdict: Verdict
  readonly plate: Plate
  /** The last solve: highest order on the finest mesh. */
  readonly solution: Solution
}

/** Orders of the accuracy loop; the order below each is solved too, to show what the higher one gained. */
const ORDERS = [5, 7]
/** Meshes that the loop makes at most, each with half the element size near unsettled raisers. */
const MOST_MESHES = 7
/** Unknowns at which the loop stops refining. */
const MOST_DOFS = 200_000
/** Orders up to this one are refined everywhere: their error is not only at the raisers. */
const LOW_ORDER = 2

/**
 * Solves a case until every raiser's error bar is within the tolerance, or says that it is not.
 * @throws CaseError when the geometry or the load is unsound (buildPlate)
 */
export function verify(plateCase: PlateCase, options: VerifyOptions): Verification {
  const clock = options.clock ?? (() => 0)
  const start = clock()
  const tolerance = options.tolerance ?? plateCase.tolerance
  const elements = options.elements ?? 'mixed'
  const orders = options.order ? [options.order] : ORDERS
  const plate = buildPlate(plateCase)
  const time = { mesh: 0, solve: 0, total: 0 }
  const passes: Pass[] = []
  const timed = <T>(stage: 'mesh' | 'solve', work: () => T): T => {
    const begun = clock()
    const made = work()
    time[stage] += clock() - begun
    return made
  }
  const makeMesh = (fineness: Fineness) => timed('mesh', () => meshPlate(plate, fineness, elements))
  const solveAt = (on: { mesh: Mesh; number: number }, order: number): Solution => {
    const solution = timed('solve', () => solvePlate(plate, on.mesh, order))
    passes.push(readRaisers(solution, on.number))
    return solution
  }
  const everywhere = orders[0] <= LOW_ORDER
  const refine = (fineness: Fineness, at: readonly number[]) =>
    everywhere ? { ...fineness, all: fineness.all + 1 } : finer(plate, fineness, at)

  let fineness: Fineness = { raiser: plate.raisers.map(() => 0), all: 0 }
  let coarse = { mesh: makeMesh(fineness), number: 1 }
  fineness = refine(fineness, plate.raisers.map((_, r) => r))
  let fine = { mesh: makeMesh(fineness), number: 2 }
  let solution: Solution
  let rung = 0
  for (let compareCoarse = true; ; ) {
    const order = orders[rung]
    if (compareCoarse) solveAt(coarse, order)
    if (order > 1) solveAt(fine, order - 1)
    solution = solveAt(fine, order)

    const unsettled = unsettledRaisers(passes, barsOf(passes, plate.raisers.length), tolerance)
    if (unsettled.length === 0 || (options.order && !everywhere)) break
    if (rung + 1 < orders.length) {
      rung++
      compareCoarse = true
      continue
    }
    const growth = everywhere ? 4 : 1
    if (fine.number === MOST_MESHES || growth * passes[passes.length - 1].dof > MOST_DOFS) break
    fineness = refine(fineness, unsettled)
    coarse = fine
    fine = { mesh: makeMesh(fineness), number: coarse.number + 1 }
    compareCoarse = false
  }
  time.total = clock() - start
  const fixedOrder = options.order ?? null
  return { verdict: composeVerdict({ plateCase, file: options.file, tolerance, fixedOrder, elements, passes, solution, time }), plate, solution }
}

/** One halving more at the given raisers, and at sharp ones: their singular fields reach the others. */
function finer(plate: Plate, { raiser, all }: Fineness, at: readonly number[]): Fineness {
  return {
    raiser: raiser.map((halvings, r) => (at.includes(r) || plate.raisers[r].sharp !== null ? halvings + 1 : halvings)),
    all
  }
}

// A case in, its verdict out. This is the whole pipe on one screen: plate, mesh, displacements, peaks, error bars; and the only
// loop: while a bar is wider than the tolerance, raise the order as long as that pays, then refine near the raisers that are open.

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
import { solveOrders } from './solve/solve.ts'

/** How a plate is to be solved. */
export interface SettleOptions {
  /** A fixed order on one mesh; up to order 2, which says nothing by itself, the mesh is refined until its bar holds. */
  readonly order?: number
  /** Kind of elements; quads along arcs and triangles elsewhere if left out. */
  readonly elements?: ElementKind
  /** Milliseconds, for the times in the verdict; without it they are 0. */
  readonly clock?: () => number
}

export interface VerifyOptions extends SettleOptions {
  /** The case's name in the verdict's `file`. */
  readonly file: string
  /** Half-width wanted on every peak, relative; the case's own by default. */
  readonly tolerance?: number
}

export interface Verification {
  readonly verdict: Verdict
  readonly plate: Plate
  /** The last solve: highest order on the finest mesh. */
  readonly solution: Solution
}

/** Orders of the first solves on a mesh, and the highest that the loop goes to; each bar compares an order with the two below. */
const FIRST_ORDER = 6
const HIGHEST_ORDER = 8
/** Meshes that the loop makes at most, each with half the element size near unsettled raisers. */
const MOST_MESHES = 7
/** Unknowns at which the loop stops refining. */
const MOST_DOFS = 200_000
/** Orders up to this one converge with the mesh only, which is refined everywhere: their error is not only at the raisers. */
const LOW_ORDER = 2
/** A further order on the same mesh is worth its cost where the one before cut the widest bar at least to this part. */
const WORTH_AN_ORDER = 0.5

/**
 * Solves a case until every raiser's error bar is within the tolerance, or says that it is not.
 * @throws CaseError when the geometry or the load is unsound (buildPlate)
 */
export function verify(plateCase: PlateCase, options: VerifyOptions): Verification {
  const clock = options.clock ?? (() => 0)
  const start = clock()
  const tolerance = options.tolerance ?? plateCase.tolerance
  const plate = buildPlate(plateCase)
  const { passes, solution, time } = settle(plate, tolerance, options)
  const findings = {
    plateCase,
    file: options.file,
    tolerance,
    fixedOrder: options.order ?? null,
    elements: options.elements ?? 'mixed',
    passes,
    solution,
    time: { ...time, total: clock() - start }
  }
  return { verdict: composeVerdict(findings), plate, solution }
}

export interface Settled {
  /** Every solve of the loop as the raisers saw it, in its order; `barsOf` gives their bars. */
  readonly passes: readonly Pass[]
  /** The last solve. */
  readonly solution: Solution
  /** Milliseconds. */
  readonly time: { readonly mesh: number; readonly solve: number }
}

/** Solves a plate, with any tractions that balance, until the bar of every raiser's peak is within the tolerance or nothing helps. */
export function settle(plate: Plate, tolerance: number, options: SettleOptions = {}): Settled {
  const clock = options.clock ?? (() => 0)
  const elements = options.elements ?? 'mixed'
  const time = { mesh: 0, solve: 0 }
  const passes: Pass[] = []
  const timed = <T>(stage: 'mesh' | 'solve', work: () => T): T => {
    const begun = clock()
    const made = work()
    time[stage] += clock() - begun
    return made
  }
  const makeMesh = (fineness: Fineness) => timed('mesh', () => meshPlate(plate, fineness, elements))
  const solveAt = (mesh: Mesh, number: number, orders: readonly number[]): Solution => {
    const solutions = timed('solve', () => solveOrders(plate, mesh, orders))
    for (const solution of solutions) passes.push(readRaisers(solution, number))
    return solutions[solutions.length - 1]
  }
  const stillOpen = () => unsettledRaisers(passes, barsOf(passes, plate.raisers.length), tolerance)

  const fixed = options.order ?? null
  const isLow = fixed !== null && fixed <= LOW_ORDER
  let fineness: Fineness = { raiser: plate.raisers.map(() => 0), all: 0 }
  let order = fixed ?? FIRST_ORDER
  let solution: Solution
  for (let number = 1; ; number++) {
    const mesh = makeMesh(fineness)
    solution = solveAt(mesh, number, isLow ? [order] : threeUpTo(order))
    let open = stillOpen()
    while (fixed === null && open.length > 0 && order < HIGHEST_ORDER && isWorthAnOrder(passes, open)) {
      solution = solveAt(mesh, number, [++order])
      open = stillOpen()
    }
    if (isLow ? number > 1 && open.length === 0 : open.length === 0 || fixed !== null) break
    const next = passes[passes.length - 1].dof * (isLow ? 4 : 1)
    if (number === MOST_MESHES || next > MOST_DOFS) break
    fineness = isLow ? { ...fineness, all: number } : finer(plate, fineness, open)
  }
  return { passes, solution, time }
}

/** An order and the two below it, as far as there are any. */
function threeUpTo(order: number): number[] {
  return [order - 2, order - 1, order].filter((p) => p >= 1)
}

/** True where the last order brought the open raisers much nearer to their limits than the order before had. */
function isWorthAnOrder(passes: readonly Pass[], open: readonly number[]): boolean {
  const [twoBelow, below, last] = passes.slice(-3).map(({ raisers }) => raisers)
  return open.every((r) => {
    const [a, b, c] = [twoBelow[r]!.magnitude, below[r]!.magnitude, last[r]!.magnitude]
    return Math.abs(c - b) <= WORTH_AN_ORDER * Math.abs(b - a)
  })
}

/** One halving more at the given raisers, and at sharp ones: their singular fields reach the others. */
function finer(plate: Plate, { raiser, all }: Fineness, at: readonly number[]): Fineness {
  return {
    raiser: raiser.map((halvings, r) => (at.includes(r) || plate.raisers[r].sharp !== null ? halvings + 1 : halvings)),
    all
  }
}

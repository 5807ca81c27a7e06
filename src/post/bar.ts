// The error bar of a raiser's peak: what the sequence of orders on one mesh says, and at the peak itself what is zero in truth and left
// over all the same: the normal and shear stress on the free edge, and the step of the edge stress from one side to the next.
//
// With K(p) the peak at order p: |K(p) - K(p - 1)| is about the error of order p - 1, several times that of order p. It can be small by
// chance where a sequence crosses the truth; then the order before shows it, and what is left over shows how far the field is
// from the true one. A raised order makes every element better, also those far from the raiser that may spoil its peak; a mesh that is
// refined at the raiser does not. Orders 1 and 2 converge with the mesh only, and there the step between two meshes counts.

/** What one solve says about a raiser; magnitudes in plate stress units. */
export interface Evidence {
  /** Mesh, counted from 1, each finer than the one before. */
  readonly mesh: number
  readonly order: number
  /** |peak|. */
  readonly peak: number
  /** Largest |normal or shear stress| on the free sides at the peak. */
  readonly leftOver: number
  /** Largest |step| of the edge stress at the ends of the side with the peak. */
  readonly step: number
}

/** Which part of the evidence set the bar. */
export type BarSource = 'mesh' | 'order' | 'two orders' | 'free edge' | 'step' | 'rounding'

export interface Bar {
  /** Half-width, in the unit of the peaks. */
  readonly error: number
  readonly source: BarSource
}

/**
 * How much of the last step in order counts, and of the last two together. Around a peak in the middle of an element, or between two equal
 * ones, the field is nearly even, and an even order gains little over the odd one below it: the last step is then small for its error.
 */
const LAST_ORDER = { odd: 2, even: 3 }
const TWO_ORDERS = { odd: 0.2, even: 0.3 }
/**
 * Of the step of the edge stress, at the last order and at the one below: the first counts where a peak sits at a tangent point, whose error
 * falls slowly with the order; the second shows an error that two orders share, which their difference does not.
 */
const STEP = 0.6
const STEP_BELOW = 0.4
/**
 * Of the stress left over. At orders 1 and 2 it has to carry the bar: on 27 plates with all kinds of elements, two to six halvings, a share of
 * 3 at order 1 (constant strain says little of the gradient at an edge) and 1 at order 2 left no error outside. Up to order 4 the
 * steps are still irregular; from order 5 on they bound the error, and it only guards.
 */
function leftOverShare(order: number): number {
  if (order === 1) return 4
  return order <= 4 ? 1.25 : 0.2
}
/** Of the step between two meshes at orders 1 and 2: the finer mesh still has most of the coarser one's error. */
const LAST_MESH = 2
/** Orders up to this one are judged by two meshes. */
const LOW_ORDER = 2
/** Relative error that rounding may leave in a peak. */
const ROUNDING = 1e-10

/** The bar of the last solve in `evidence`, Infinity while there is nothing to compare it with. */
export function errorBar(evidence: readonly Evidence[]): Bar {
  const last = evidence[evidence.length - 1]
  const solveAt = (mesh: number, order: number) => evidence.findLast((e) => e.mesh === mesh && e.order === order)
  const candidates: Bar[] = [
    { error: ROUNDING * last.peak, source: 'rounding' },
    { error: leftOverShare(last.order) * last.leftOver, source: 'free edge' }
  ]
  if (last.order <= LOW_ORDER) {
    const coarser = solveAt(last.mesh - 1, last.order)
    candidates.push({ error: coarser ? LAST_MESH * Math.abs(last.peak - coarser.peak) : Infinity, source: 'mesh' })
  } else {
    const parity = last.order % 2 === 0 ? 'even' : 'odd'
    const [below, twoBelow] = [solveAt(last.mesh, last.order - 1), solveAt(last.mesh, last.order - 2)]
    candidates.push(
      { error: below ? LAST_ORDER[parity] * Math.abs(last.peak - below.peak) : Infinity, source: 'order' },
      { error: twoBelow ? TWO_ORDERS[parity] * Math.abs(last.peak - twoBelow.peak) : Infinity, source: 'two orders' },
      { error: Math.max(STEP * last.step, STEP_BELOW * (below?.step ?? 0)), source: 'step' }
    )
  }
  return candidates.reduce((widest, bar) => (bar.error > widest.error ? bar : widest))
}

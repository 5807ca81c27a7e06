// The colour scale of stress: the darker, the more tension. It runs in one sweep from the lightest colour at the least
// stress to the darkest at the greatest, evenly in OKLab, so that it survives a grey print and any colour blindness.
// Zero is a plain grey wherever it falls. Tension turns from heather over rose and copper to umber (from bluish to
// yellowish: the axis that red-green blindness leaves), compression through spruce green, and it brightens as it grows.

import type { Colour } from './canvas.ts'
import { colourOfLab, type Lab, labDistance } from './oklab.ts'

const LIGHTEST = 0.955
const DARKEST = 0.235

/** OKLab a and b. */
type Tint = readonly [a: number, b: number]

/** Tints at shares 0, 1/4, 1/2, 3/4, 1 of the way from zero to the largest magnitude. */
const TENSION: readonly Tint[] = [[0, 0], [0.034, -0.038], [0.102, -0.014], [0.112, 0.062], [0.078, 0.058]]
const COMPRESSION: readonly Tint[] = [[0, 0], [-0.036, 0.006], [-0.068, 0.01], [-0.07, 0.002], [-0.05, -0.014]]
/** Below this lightness, and within this of white, a screen can show less chroma: a and b shrink with what is left. */
const DARK = 0.38
const PALE = 0.09

/** Pieces in which the path's length is measured. */
const PIECES = 400
/** Colours in the table: more than an 8-bit screen can tell apart. */
const SHADES = 2048

/** Colours for stresses from `low` to `high`, which enclose zero; the stress unit is the caller's. */
export interface Scale {
  readonly low: number
  readonly high: number
  /** 2048 colours, evenly from `low` to `high`. */
  readonly shade: Uint32Array
}

/**
 * The scale for stresses between `low` <= 0 and `high` >= 0, not both zero.
 * The lightness at zero is chosen so that a unit of stress is the same distance in OKLab on either side of it.
 */
export function makeScale(low: number, high: number): Scale {
  const reach = Math.max(-low, high)
  if (!(low <= 0 && high >= 0 && reach > 0)) throw new RangeError(`a colour scale from ${low} to ${high}`)

  const tensionPath = (zero: number) => armPath(TENSION, zero, DARKEST, high / reach)
  const compressionPath = (zero: number) => armPath(COMPRESSION, zero, LIGHTEST, -low / reach)
  // a lighter zero lengthens the way to the darkest end and shortens the other: halve the interval
  let [darker, lighter] = [DARKEST, LIGHTEST]
  for (let halving = 0; halving < 40; halving++) {
    const zero = (darker + lighter) / 2
    const excess = lengthsAlong(tensionPath(zero))[PIECES] * -low - lengthsAlong(compressionPath(zero))[PIECES] * high
    if (excess > 0) lighter = zero
    else darker = zero
  }
  const zero = (darker + lighter) / 2
  const tension = evenly(tensionPath(zero))
  const compression = evenly(compressionPath(zero))
  const shade = Uint32Array.from({ length: SHADES }, (_, i) => {
    const stress = low + ((high - low) * i) / (SHADES - 1)
    return colourOfLab(stress >= 0 ? tension(high > 0 ? stress / high : 0) : compression(stress / low))
  })
  return { low, high, shade }
}

/** Colour of a stress; beyond the ends that of the end. */
export function colourOfStress({ low, high, shade }: Scale, stress: number): Colour {
  const share = Math.min(1, Math.max(0, (stress - low) / (high - low)))
  return shade[Math.round(share * (SHADES - 1))]
}

/** PIECES + 1 colours from zero to an end: lightness straight, a and b along the arm as far as `share` of it. */
function armPath(arm: readonly Tint[], zero: number, end: number, share: number): Lab[] {
  return Array.from({ length: PIECES + 1 }, (_, i) => {
    const lightness = zero + ((end - zero) * i) / PIECES
    const room = soften(lightness / DARK) * soften((1 - lightness) / PALE)
    const [a, b] = smoothAt(arm, (share * i) / PIECES)
    return [lightness, room * a, room * b]
  })
}

/** About x below 1 and 1 above, without a kink. */
function soften(x: number): number {
  return x / (1 + x ** 4) ** 0.25
}

/** Distance in OKLab from the start of a path to each of its points. */
function lengthsAlong(path: readonly Lab[]): Float64Array {
  const length = new Float64Array(path.length)
  for (let i = 1; i < path.length; i++) length[i] = length[i - 1] + labDistance(path[i - 1], path[i])
  return length
}

/** The path as a function of the share of its length. */
function evenly(path: readonly Lab[]): (share: number) => Lab {
  const length = lengthsAlong(path)
  return (share) => {
    const wanted = share * length[PIECES]
    let i = 1
    while (i < PIECES && length[i] < wanted) i++
    const within = length[i] > length[i - 1] ? (wanted - length[i - 1]) / (length[i] - length[i - 1]) : 0
    const [p, q] = [path[i - 1], path[i]]
    return [p[0] + within * (q[0] - p[0]), p[1] + within * (q[1] - p[1]), p[2] + within * (q[2] - p[2])]
  }
}

/** Through evenly spaced points at t in [0, 1], with slopes by central differences: E. Catmull, R. Rom, 1974. */
function smoothAt(points: readonly Tint[], t: number): [number, number] {
  const last = points.length - 1
  const i = Math.min(last - 1, Math.floor(t * last))
  const s = t * last - i
  const [p0, p1, p2, p3] = [points[Math.max(0, i - 1)], points[i], points[i + 1], points[Math.min(last, i + 2)]]
  const along = (axis: 0 | 1) =>
    p1[axis] +
    (s / 2) *
      (p2[axis] - p0[axis] +
        s * (2 * p0[axis] - 5 * p1[axis] + 4 * p2[axis] - p3[axis] + s * (3 * (p1[axis] - p2[axis]) + p3[axis] - p0[axis])))
  return [along(0), along(1)]
}

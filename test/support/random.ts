// Random plates from a seed: bars of one to three sections with steps, fillets, notches and holes of all sizes, some close
// together. Each is meant to be valid; whether it is refused is for the program to say.

import { buildPlate } from '../../src/case/build.ts'
import { isInside, nearestOn } from '../../src/case/nearest.ts'
import type { Loop } from '../../src/case/plate.ts'
import { readCase } from '../../src/case/read.ts'

/** The fields of a case file. */
export interface RandomCase {
  readonly name: string
  readonly thickness: number
  readonly material: { readonly nu: number }
  readonly plate: { readonly sections: readonly Section[]; readonly fillets: readonly number[] }
  readonly holes: readonly { readonly shape: 'circle'; readonly diameter: number; readonly at: readonly [number, number] }[]
  readonly notches: readonly Notch[]
  readonly load: { readonly axial: number; readonly moment: number }
}

interface Section {
  readonly width: number
  readonly length: number
  readonly offset: number
}

interface Notch {
  readonly side: 'top' | 'bottom' | 'both'
  readonly x: number
  readonly depth: number
  readonly radius: number
  readonly angle: number
}

/** Numbers in [0, 1) from a seed: the mulberry32 generator (T. Ettinger, public domain). */
export function randomNumbers(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let z = state
    z = Math.imul(z ^ (z >>> 15), z | 1)
    z ^= z + Math.imul(z ^ (z >>> 7), z | 61)
    return ((z ^ (z >>> 14)) >>> 0) / 4294967296
  }
}

/** Least ligament beside a hole, in its diameters, and beside a notch, in its depths. */
const LEAST_LIGAMENT = 0.0205

/** The case of a seed, its lengths rounded to 1e-6 of the width. */
export function randomCase(seed: number): RandomCase {
  const random = randomNumbers(seed)
  const between = (low: number, high: number) => low + (high - low) * random()
  const logBetween = (low: number, high: number) => low * (high / low) ** random()
  const pick = <T>(...values: T[]): T => values[Math.floor(random() * values.length)]
  const round = (value: number) => Math.round(value * 1e6) / 1e6

  const sections: Section[] = []
  const fillets: number[] = []
  const count = pick(1, 1, 2, 2, 3)
  for (let i = 0; i < count; i++) {
    // twice a rounded half: a fillet as large as its step then is so exactly
    const width = 2 * round(i === 0 ? 0.5 : (sections[i - 1].width / 2) * pick(between(0.4, 0.95), 1 / between(0.4, 0.95)))
    // a step keeps its material inside the wider section, so an offset is at most half the difference
    const room = i === 0 ? 0 : Math.abs(width - sections[i - 1].width) / 2
    const before = i === 0 ? 0 : sections[i - 1].offset
    const offset = round(before + pick(0, 0, 0.5, -0.5, 0.98) * room)
    sections.push({ width, length: round(width * pick(between(0.6, 3), between(1, 3), between(1, 3), between(3, 12), logBetween(12, 50))), offset })
    if (i === 0) continue
    const height = Math.abs(width - sections[i - 1].width) / 2
    const wanted = pick(logBetween(0.03, 1) * height, height, between(1, 2) * height, logBetween(0.002, 0.5) * Math.min(width, sections[i - 1].width))
    const narrow = width < sections[i - 1].width ? sections[i] : sections[i - 1]
    fillets.push(round(Math.min(wanted, 0.3 * narrow.length)))
  }
  const base = { name: `random ${seed}`, thickness: 0.1, material: { nu: pick(0, 0.29, 0.3, 0.499, between(0, 0.499)) }, plate: { sections, fillets } }
  const load = pick({ axial: 1, moment: 0 }, { axial: 1, moment: 0 }, { axial: 0, moment: 0.2 }, { axial: 1, moment: round(between(-0.3, 0.3)) })

  const notches: Notch[] = []
  let x0 = 0
  sections.forEach(({ width, length }) => {
    const from = x0 + 0.3 * length + 0.05 * width
    const to = x0 + 0.7 * length - 0.05 * width
    x0 += length
    if (random() < 0.55) return
    const side = pick<Notch['side']>('top', 'bottom', 'both', 'both')
    const depth = round(width * logBetween(0.02, side === 'both' ? 0.3 : 0.45))
    const radius = round(depth * pick(1, logBetween(0.08, 1), logBetween(0.08, 1), logBetween(0.02, 1), between(1, 4), logBetween(1, 50)))
    const angle = pick(0, 0, 0, round(between(20, 90)))
    const halfMouth = depth * Math.tan((angle * Math.PI) / 360) + radius / Math.cos((angle * Math.PI) / 360)
    if (2 * halfMouth < to - from) notches.push({ side, x: round(between(from + halfMouth, to - halfMouth)), depth, radius, angle })
  })

  const outer = buildPlate(readCase(JSON.stringify({ ...base, notches, load }), base.name))
  const scale = outer.unit.length
  const holes: { shape: 'circle'; diameter: number; at: [number, number] }[] = []
  const wanted = pick(0, 1, 1, 2, 3, 6)
  for (let attempt = 0; attempt < 40 && holes.length < wanted; attempt++) {
    const place: [number, number] = [between(0.02, 0.98) * x0, between(-0.6, 0.6)]
    const clear = Math.min(clearance(outer.loops[0], place, scale), ...holes.map(({ diameter, at }) => Math.hypot(at[0] - place[0], at[1] - place[1]) - diameter / 2))
    if (clear < 0.002) continue
    // the hole touches the limit of its ligament, comes close to it, or has room
    const ligament = pick(LEAST_LIGAMENT, logBetween(LEAST_LIGAMENT, 0.3), between(0.1, 1))
    const largest = clear / (0.5 + ligament)
    const diameter = round(Math.min(largest, pick(largest, logBetween(0.01, 0.6))) - 1e-6)
    const besideNotch = notches.every(({ depth }) => clear - diameter / 2 > LEAST_LIGAMENT * depth)
    if (besideNotch && diameter > 0.002) holes.push({ shape: 'circle', diameter, at: [round(place[0]), round(place[1])] })
  }
  return { ...base, holes, notches, load }
}

/** Distance from a place inside a loop to its nearest edge, in the case's unit; negative outside. */
function clearance(loop: Loop, [x, y]: readonly [number, number], scale: number): number {
  const [px, py] = [x / scale, y / scale]
  if (!isInside(loop, [px, py])) return -1
  return scale * Math.min(...loop.map(({ curve }) => {
    const { at } = nearestOn(curve, px, py)
    return Math.hypot(at[0] - px, at[1] - py)
  }))
}

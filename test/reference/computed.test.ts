import { describe, expect, it } from 'vitest'
import { readCase } from '../../src/case/read.ts'
import type { RaiserVerdict } from '../../src/post/verdict.ts'
import { verify } from '../../src/verify.ts'
import { expectNear } from '../support/near.ts'

// Independent calculations, no publications: strip holes by complex potentials (4 to 5 digits), shoulders and notches by boundary
// elements (0.1 to 0.2 % for a radius of at least 0.05 of the narrow width). The bars are long enough that the ends do not count.

type Load = 'tension' | 'bending'

function solve(parts: object, load: Load | { axial: number; moment: number }): RaiserVerdict {
  const end = load === 'tension' ? { axial: 1000 } : load === 'bending' ? { moment: 10000 } : load
  const { verdict } = verify(readCase(JSON.stringify({ name: 'plate', thickness: 1, load: end, ...parts }), 'plate'), { file: 'plate' })
  expect(verdict.settled).toBe(true)
  return verdict.raisers[0]
}

const W = 100

describe('strip with a central hole', () => {
  const holed = (ratio: number) => ({ plate: { sections: [{ width: W, length: 4 * W }] }, holes: [{ shape: 'circle', diameter: ratio * W, at: [2 * W, 0] }] })
  // d / W, Kt gross in tension, Kt in bending on 12 M r / (t (W^3 - d^3))
  const rows = [
    [0.05, 3.0089, 2], [0.1, 3.0361, 1.998], [0.2, 3.1526, 1.989], [0.3, 3.3744, 1.97],
    [0.4, 3.7472, 1.947], [0.5, 4.3476, 1.928], [0.6, 5.3184, 1.919], [0.7, 6.9872, 1.924]
  ]
  it.each(rows)('d/W = %f', (ratio, tension, bending) => {
    expectNear(solve(holed(ratio), 'tension').kt!.gross, tension, { rel: 2e-4, because: 'computed to 4 or 5 digits' })
    expectNear(solve(holed(ratio), 'bending').kt!.net, bending, { rel: 4e-4, because: 'computed, printed to 4 digits' })
  })
})

describe('shoulder', () => {
  // D / d, r / d, Kt in tension, Kt in bending
  const rows = [
    [1.02, 0.05, 1.507, 1.484], [1.1, 0.05, 2.059, 1.931], [1.1, 0.1, 1.736, 1.627], [1.1, 0.2, 1.505, 1.412],
    [1.2, 0.05, 2.403, 2.155], [1.2, 0.1, 1.968, 1.765], [1.2, 0.2, 1.657, 1.491], [1.5, 0.05, 2.898, 2.387],
    [1.5, 0.1, 2.295, 1.897], [1.5, 0.2, 1.861, 1.557], [1.5, 0.3, 1.668, 1.411], [2, 0.05, 3.232, 2.476],
    [2, 0.1, 2.506, 1.942], [2, 0.2, 1.983, 1.573], [2, 0.3, 1.749, 1.417], [3, 0.05, 3.475, 2.508],
    [3, 0.1, 2.653, 1.954], [3, 0.2, 2.059, 1.575]
  ]
  it.each(rows)('D/d = %f, r/d = %f', (D, r, tension, bending) => {
    const d = 40
    const bar = { plate: { sections: [{ width: D * d, length: 3 * D * d }, { width: d, length: 4 * d }], fillets: [r * d] } }
    expectNear(solve(bar, 'tension').kt!.net, tension, { rel: 3e-3, because: 'computed by boundary elements' })
    expectNear(solve(bar, 'bending').kt!.net, bending, { rel: 3e-3, because: 'computed by boundary elements' })
  })
})

describe('opposite notches', () => {
  const notched = (depth: number, radius: number) => ({ plate: { sections: [{ width: W, length: 4 * W }] }, notches: [{ side: 'both', x: 2 * W, depth, radius }] })
  // 2 t / H, t / r, Kt in tension, Kt in bending; rows with a radius of at least 0.05 of the net width
  const rows = [
    [0.1, 1, 2.745, 2.409], [0.2, 1, 2.429, 1.986], [0.4, 1, 1.865, 1.489], [0.6, 1, 1.42, 1.238],
    [0.1, 0.25, 1.774, 1.571], [0.2, 0.25, 1.57, 1.343], [0.4, 0.5, 1.49, 1.267], [0.2, 2, 3.168, 2.567],
    [0.4, 2, 2.425, 1.851], [0.6, 2, 1.789, 1.439], [0.4, 4, 3.238, 2.408], [0.6, 4, 2.363, 1.775], [0.6, 8, 3.206, 2.304]
  ]
  it.each(rows)('2t/H = %f, t/r = %f', (x, ratio, tension, bending) => {
    const depth = (x * W) / 2
    expectNear(solve(notched(depth, depth / ratio), 'tension').kt!.net, tension, { rel: 3e-3, because: 'computed by boundary elements' })
    expectNear(solve(notched(depth, depth / ratio), 'bending').kt!.net, bending, { rel: 3e-3, because: 'computed by boundary elements' })
  })
})

describe('single notch', () => {
  const notched = (depth: number, radius: number) => ({ plate: { sections: [{ width: W, length: 5 * W }] }, notches: [{ side: 'top', x: 2.5 * W, depth, radius }] })
  // t / H, t / r, Kt in tension through the middle of the net section, Kt in bending
  const rows = [
    [0.1, 0.5, 1.764, 1.808], [0.3, 0.5, 1.283, 1.291], [0.1, 1, 2.204, 2.28], [0.2, 1, 1.757, 1.825], [0.5, 1, 1.25, 1.243],
    [0.1, 2, 2.85, 2.975], [0.3, 2, 1.851, 1.943], [0.2, 4, 2.911, 3.143], [0.5, 4, 1.775, 1.817], [0.5, 8, 2.255, 2.389]
  ]
  it.each(rows)('t/H = %f, t/r = %f', (x, ratio, tension, bending) => {
    const depth = x * W
    const bar = notched(depth, depth / ratio)
    expectNear(solve(bar, 'bending').kt!.net, bending, { rel: 3e-3, because: 'computed by boundary elements' })
    // a pull along the middle of the net section, t / 2 below the bar's: its moment about the bar's middle is -P t / 2
    const { peak } = solve(bar, { axial: 1000, moment: (-1000 * depth) / 2 })
    expectNear(Math.abs(peak!.stress) / (1000 / (W - depth)), tension, { rel: 3e-3, because: 'computed by boundary elements' })
  })
})

import { describe, expect, it } from 'vitest'
import { nominalStress } from '../../src/post/nominal.ts'
import type { Nominal } from '../../src/post/verdict.ts'
import { plateFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'

const BY_HAND = { rel: 2e-6, because: 'the hand calculation is written to six figures' }

/** Nominal stresses of the raisers of a case, by id. */
function nominals(fields: object): Record<string, Nominal | { why: string }> {
  const { plate, units } = plateFrom(fields)
  return Object.fromEntries(plate.raisers.map(({ id }, r) => [id, nominalStress(plate, r, units)]))
}

function nominalOf(fields: object, id: string): Nominal {
  const found = nominals(fields)[id]
  if ('why' in found) throw new Error(`no nominal: ${found.why}`)
  return found
}

function strip(width: number, holes: object[], load: object) {
  return { thickness: 5, plate: { sections: [{ width, length: 300 }] }, holes, load }
}

const stepped = {
  thickness: 5,
  plate: { sections: [{ width: 66, length: 140 }, { width: 44, length: 140 }], fillets: [6] }
}

describe('nominal stress at a hole', () => {
  it('pulled: P/(t (W − d)) net, P/(t W) gross', () => {
    const found = nominalOf(strip(50, [{ id: 'bore', shape: 'circle', diameter: 10, at: [150, 0] }], { axial: 20000 }), 'bore')
    expectNear(found.net, 100, BY_HAND)
    expectNear(found.gross, 80, BY_HAND)
    expect(found.flexure).toBe(null)
    expect(found.how).toBe('P / (t (W − d)) = 20000 / (5 × 40)')
  })

  it('pushed: negative', () => {
    const found = nominalOf(strip(50, [{ id: 'bore', shape: 'circle', diameter: 10, at: [150, 0] }], { axial: -20000 }), 'bore')
    expectNear(found.net, -100, BY_HAND)
    expectNear(found.gross, -80, BY_HAND)
    expect(found.how).toBe('P / (t (W − d)) = −20000 / (5 × 40)')
  })

  it('off the centreline: plain P/A, and with the bending of the eccentric section as flexure', () => {
    const found = nominalOf(strip(50, [{ id: 'bore', shape: 'circle', diameter: 20, at: [150, 8] }], { axial: 20000 }), 'bore')
    expectNear(found.net, 133.3333, BY_HAND)
    expectNear(found.gross, 80, BY_HAND)
    // parts −25..−2 and 18..25: centroid −5.33333, I = 7616.667 a mm of thickness; at y = 18
    // 4000/30 + 4000 × 5.33333 × 23.33333/7616.667
    expectNear(found.flexure!, 198.6871, BY_HAND)
  })

  it('bent, central: 12 M r/(t (W³ − d³)) at its own edge, 6 M/(t W²) gross', () => {
    const found = nominalOf(strip(50, [{ id: 'bore', shape: 'circle', diameter: 10, at: [150, 0] }], { moment: 200000 }), 'bore')
    expectNear(found.net, 19.354839, BY_HAND)
    expectNear(found.gross, 96, BY_HAND)
    expect(found.flexure).toBe(null)
    expect(found.how).toBe('12 M r / (t (W³ − d³)) = 12 × 200000 × 5 / (5 × (50³ − 10³))')
  })

  it('bent the other way, central: tension is then at the lower edge', () => {
    const found = nominalOf(strip(50, [{ id: 'bore', shape: 'circle', diameter: 10, at: [150, 0] }], { moment: -200000 }), 'bore')
    expectNear(found.net, 19.354839, BY_HAND)
    expect(found.how).toBe('−12 M r / (t (W³ − d³)) = −12 × (−200000) × 5 / (5 × (50³ − 10³))')
  })

  it('bent, off the centreline: M y/I about the net centroid at whichever edge gives more', () => {
    const found = nominalOf(strip(60, [{ id: 'bore', shape: 'circle', diameter: 12, at: [150, 10] }], { moment: 100000 }), 'bore')
    // parts −30..4 and 16..30: centroid −2.5, I = 16356 a mm of thickness; at y = 16: 20000 × 18.5/16356
    expectNear(found.net, 22.62167, BY_HAND)
    expectNear(found.gross, 33.33333, BY_HAND)
    expect(found.how).toBe('M y / I = 100000 × 18.5 / 81780')
  })

  it('leaves out what its cut line crosses of another hole', () => {
    const holes = [
      { id: 'one', shape: 'circle', diameter: 20, at: [150, -25] },
      { id: 'two', shape: 'circle', diameter: 20, at: [156, 25] }
    ]
    // the chord of the other hole 6 mm off its centre is 2 sqrt(10² − 6²) = 16
    const found = nominalOf(strip(100, holes, { axial: 32000 }), 'one')
    expectNear(found.net, 32000 / (5 * 64), BY_HAND)
    expectNear(found.gross, 64, BY_HAND)
    expect(found.how).toBe('P / (t w) = 32000 / (5 × 64)')
  })

  it('leaves out what its cut line crosses of a notch, but not in the gross section', () => {
    const fields = {
      ...strip(100, [{ id: 'bore', shape: 'circle', diameter: 20, at: [156, 0] }], { axial: 36000 }),
      notches: [{ id: 'nick', side: 'top', x: 150, depth: 10, radius: 10 }]
    }
    // the notch is sqrt(10² − 6²) = 8 deep there
    const found = nominals(fields) as Record<string, Nominal>
    expectNear(found.bore.net, 36000 / (5 * 72), BY_HAND)
    expectNear(found.bore.gross, 72, BY_HAND)
    // and the notch's own cut meets the hole with the chord 2 sqrt(10² − 6²) = 16
    expectNear(found.nick.net, 36000 / (5 * 74), BY_HAND)
    expectNear(found.nick.gross, 72, BY_HAND)
  })

  it('beside a fillet: the width includes the fillet', () => {
    const fields = (sections: object[], x: number) => ({
      thickness: 8,
      plate: { sections, fillets: [8] },
      holes: [{ id: 'bore', shape: 'circle', diameter: 10, at: [x, 0] }],
      load: { axial: 24000 }
    })
    const [wide, narrow] = [{ width: 60, length: 110 }, { width: 40, length: 110 }]
    // 2 mm past the step: 2 (28 − sqrt(8² − 6²)) = 45.416995 wide
    expectNear(nominalOf(fields([wide, narrow], 112), 'bore').gross, 24000 / (8 * 45.416995), BY_HAND)
    // at the step the limit from the narrow side: 40 + 2 × 8, also when the narrow part is on the left
    expectNear(nominalOf(fields([wide, narrow], 110), 'bore').gross, 24000 / (8 * 56), BY_HAND)
    expectNear(nominalOf(fields([narrow, wide], 110), 'bore').gross, 24000 / (8 * 56), BY_HAND)
    expectNear(nominalOf(fields([wide, narrow], 108), 'bore').gross, 50, BY_HAND)
  })
})

describe('nominal stress at a notch', () => {
  const notched = (notch: object, load: object) => ({
    thickness: 5,
    plate: { sections: [{ width: 56, length: 260 }] },
    notches: [{ id: 'nick', x: 130, ...notch }],
    load
  })

  it('on one edge, pulled: plain P/A; flexure twice that for a quarter of the width', () => {
    const found = nominalOf(notched({ side: 'top', depth: 14, radius: 4 }, { axial: 14000 }), 'nick')
    expectNear(found.net, 66.66667, BY_HAND)
    expectNear(found.gross, 50, BY_HAND)
    // e = 7: 14000 × 7 × 21 × 12/(5 × 42³) = 66.66667 more
    expectNear(found.flexure!, 133.33333, BY_HAND)
    expect(found.how).toBe('P / (t d) = 14000 / (5 × 42)')
  })

  it('on the lower edge, bent: 6 M/(t d²), compression', () => {
    const found = nominalOf(notched({ side: 'bottom', depth: 14, radius: 4 }, { moment: 98000 }), 'nick')
    expectNear(found.net, -66.66667, BY_HAND)
    expect(found.how).toBe('−6 M / (t d²) = −6 × 98000 / (5 × 42²)')
  })

  it('on both edges, bent: 6 M/(t d²)', () => {
    const found = nominalOf(notched({ side: 'both', depth: 8, radius: 2, angle: 60 }, { moment: 250000 }), 'nick')
    expectNear(found.net, 187.5, BY_HAND)
    expectNear(found.gross, 95.663265, BY_HAND)
    expect(found.how).toBe('6 M / (t d²) = 6 × 250000 / (5 × 40²)')
  })

  it('is none where pull and bending cancel at its root', () => {
    const found = nominals(notched({ side: 'top', depth: 14, radius: 4 }, { axial: 14000, moment: -98000 })).nick
    expect(found).toEqual({ why: expect.stringContaining('below a thousandth of the gross one') })
  })
})

describe('nominal stress at a shoulder', () => {
  it('pulled and bent: narrow section net, wide section gross', () => {
    const found = nominalOf({ ...stepped, load: { axial: 11000, moment: 120000 } }, 'shoulder-1')
    expectNear(found.net, 124.38017, BY_HAND)
    expectNear(found.gross, 66.39118, BY_HAND)
    expect(found.how).toBe('P / (t d) + 6 M / (t d²) = 11000 / (5 × 44) + 6 × 120000 / (5 × 44²)')
  })

  it('pulled and bent the other way: the lower edge', () => {
    const found = nominalOf({ ...stepped, load: { axial: 11000, moment: -120000 } }, 'shoulder-1')
    expectNear(found.net, 124.38017, BY_HAND)
    expect(found.how).toBe('P / (t d) − 6 M / (t d²) = 11000 / (5 × 44) − 6 × (−120000) / (5 × 44²)')
  })

  it('on one side: no flexure where the load runs along the narrow part', () => {
    const plate = { sections: [{ width: 60, length: 150, offset: 9 }, { width: 42, length: 140 }], fillets: [7] }
    const found = nominalOf({ thickness: 5, plate, load: { axial: 15000 } }, 'shoulder-1')
    expectNear(found.net, 71.428571, BY_HAND)
    expectNear(found.gross, 50, BY_HAND)
    expect(found.flexure).toBe(null)
  })

  it('on one side, narrow part on the left: the load runs along the wide part', () => {
    const plate = { sections: [{ width: 42, length: 150 }, { width: 60, length: 140, offset: 9 }], fillets: [7] }
    const found = nominalOf({ thickness: 5, plate, load: { axial: 15000 } }, 'shoulder-1')
    expectNear(found.net, 71.428571, BY_HAND)
    // e = 9, upper edge y = 21: 15000 × 9 × 21 × 12/(5 × 42³) = 91.836735 more
    expectNear(found.flexure!, 163.26531, BY_HAND)
  })

  it('on one side, bent: at the edge that has the fillet', () => {
    const plate = { sections: [{ width: 60, length: 150, offset: -9 }, { width: 42, length: 140 }], fillets: [7] }
    const found = nominalOf({ thickness: 5, plate, load: { moment: 147000 } }, 'shoulder-1')
    expectNear(found.net, -100, BY_HAND)
    expect(found.how).toBe('−6 M / (t d²) = −6 × 147000 / (5 × 42²)')
  })
})

describe('units of nominal stress', () => {
  const fields = (units: object, thickness: number, width: number, diameter: number, axial: number) => ({
    units,
    thickness,
    plate: { sections: [{ width, length: 6 * width }] },
    holes: [{ id: 'bore', shape: 'circle', diameter, at: [3 * width, 0] }],
    load: { axial }
  })

  it.each([
    [{ length: 'mm', force: 'kN', stress: 'MPa' }, 8, 60, 16, 24, 68.181818, 'P / (t (W − d)) = 24000 / (8 × 44)'],
    [{ length: 'mm', force: 'kN', stress: 'GPa' }, 8, 60, 16, 24, 0.068181818, 'P / (t (W − d)) = 24 / (8 × 44)'],
    [{ length: 'm', force: 'N', stress: 'Pa' }, 0.008, 0.06, 0.016, 24000, 68181818, 'P / (t (W − d)) = 24000 / (0.008 × 0.044)'],
    [{ length: 'cm', force: 'kN', stress: 'MPa' }, 0.8, 6, 1.6, 24, 68.181818, 'P / (t (W − d)) = 24000 / (8 × 44)'],
    [{ length: 'in', force: 'lbf', stress: 'psi' }, 0.25, 2, 0.5, 3000, 8000, 'P / (t (W − d)) = 3000 / (0.25 × 1.5)'],
    [{ length: 'in', force: 'lbf', stress: 'ksi' }, 0.25, 2, 0.5, 3000, 8, 'P / (t (W − d)) = 3 / (0.25 × 1.5)']
  ])('%o', (units, thickness, width, diameter, axial, net, how) => {
    const found = nominalOf(fields(units, thickness, width, diameter, axial), 'bore')
    expectNear(found.net, net, BY_HAND)
    expect(found.how).toBe(how)
  })
})

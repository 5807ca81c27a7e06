import { describe, expect, it } from 'vitest'
import { checkExpectations } from '../src/regress.ts'
import { verify, type Verification } from '../src/verify.ts'
import { caseFrom } from './support/case.ts'

const strip = {
  thickness: 5,
  plate: { sections: [{ width: 50, length: 250 }] },
  holes: [{ id: 'bore', shape: 'circle', diameter: 25, at: [125, 0] }],
  load: { axial: 20000 }
}
const solved = verify(caseFrom(strip), { file: 'strip.yaml' })
const bore = solved.verdict.raisers[0]

/** The solved strip as if its hole had this Kt, gross Kt and peak, with a bar of 1 % on each. */
const rounded: Verification = {
  ...solved,
  verdict: {
    ...solved.verdict,
    raisers: [{ ...bore, kt: { net: 2, gross: 4, error: 0.02, flexure: null }, peak: { ...bore.peak!, stress: -300, error: 3 } }]
  }
}

const origin = { source: 'a test', from: 'computed' }

/** The only row for one expectation. */
function rowFor(expectation: object, verification: Verification) {
  const [row] = checkExpectations(verification, caseFrom({ ...strip, expect: [{ ...origin, ...expectation }] }))
  return row
}

describe('checkExpectations', () => {
  it('gives no row for a case without expectations', () => {
    expect(checkExpectations(solved, caseFrom(strip))).toEqual([])
  })

  it.each([
    [{ raiser: 'bore', kt: 2.05, within: 0.031 }, 2, 0.02],
    [{ raiser: 'bore', gross: 4.1, within: 0.031 }, 4, 0.04],
    [{ raiser: 'bore', peak: -290, within: 0.0354 }, -300, 3]
  ])('passes %o', (expectation, found, error) => {
    expect(rowFor(expectation, rounded)).toMatchObject({ passed: true, why: null, found, error })
  })

  it('fails outside the band', () => {
    expect(rowFor({ raiser: 'bore', kt: 2.1, within: 0.04 }, rounded)).toMatchObject({ passed: false, why: 'outside the band' })
    // the sign of a peak counts
    expect(rowFor({ raiser: 'bore', peak: 300, within: 0.04 }, rounded).passed).toBe(false)
  })

  it('fails where the bar is wider than a third of the band, even at the very value', () => {
    expect(rowFor({ raiser: 'bore', kt: 2, within: 0.029 }, rounded)).toMatchObject({
      passed: false,
      why: 'its error bar is wider than a third of the band'
    })
    expect(rowFor({ raiser: 'bore', kt: 2, within: 0.031 }, rounded).passed).toBe(true)
  })

  it('fails with a reason where there is nothing to compare', () => {
    // a case file with such an id is refused; a program can still ask
    const [row] = checkExpectations(rounded, {
      ...caseFrom(strip),
      expect: [{ raiser: 'boer', kt: 2, within: 0.01, source: 'a test', from: 'computed' }]
    })
    expect(row).toMatchObject({
      passed: false,
      found: null,
      why: 'no raiser is called boer; there are bore'
    })
    expect(rowFor({ at: [125, 0], stress: 'xx', value: 80, within: 0.01 }, solved)).toMatchObject({
      passed: false,
      why: 'the point is not in the plate'
    })
  })

  // far from the hole the strip is under xx = P/(t W) = 80 and nothing else
  it.each([['xx', 80], ['s1', 80], ['vonMises', 80]])('reads %s at a point', (stress, value) => {
    expect(rowFor({ at: [15, 4], stress, value, within: 0.003 }, solved)).toMatchObject({ passed: true, what: `${stress} at 15, 4` })
  })
})

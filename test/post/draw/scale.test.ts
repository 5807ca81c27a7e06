import { describe, expect, it } from 'vitest'
import { colourOfLab, labDistance, labOf, srgbOf } from '../../../src/post/draw/oklab.ts'
import { colourOfStress, makeScale } from '../../../src/post/draw/scale.ts'
import { expectNear } from '../../support/near.ts'

const RANGES: [low: number, high: number][] = [[0, 3.1], [-0.2, 3], [-1, 3], [-3, 3], [-3, 0.3], [-212, 0]]
const STEPS = 40

/** Lab colours at STEPS + 1 evenly spaced stresses. */
function samples(low: number, high: number) {
  const scale = makeScale(low, high)
  return Array.from({ length: STEPS + 1 }, (_, i) => labOf(colourOfStress(scale, low + ((high - low) * i) / STEPS)))
}

describe('OKLab', () => {
  it('has white at lightness 1 and black at 0, both without a tint', () => {
    for (const [colour, lightness] of [[0xffffff, 1], [0x000000, 0]]) {
      const [l, a, b] = labOf(colour)
      expectNear(l, lightness, { abs: 1e-6, because: 'the coefficients are given to ten digits' })
      expectNear(Math.hypot(a, b), 0, { abs: 1e-6, because: 'grey' })
    }
  })

  it('gives back every colour that it was given', () => {
    for (let colour = 0; colour < 0x1000000; colour += 40_503) expect(colourOfLab(labOf(colour))).toBe(colour)
  })
})

describe.each(RANGES)('the scale from %d to %d', (low, high) => {
  it('darkens all the way with tension', () => {
    const lightness = samples(low, high).map(([l]) => l)
    for (let i = 1; i <= STEPS; i++) expect(lightness[i]).toBeLessThan(lightness[i - 1])
    // two greys of a print are told apart over the whole range
    expect(lightness[0] - lightness[STEPS]).toBeGreaterThan(0.65)
  })

  it('takes equal steps for equal stresses', () => {
    const colours = samples(low, high)
    const step = colours.slice(1).map((colour, i) => labDistance(colour, colours[i]))
    const mean = step.reduce((sum, d) => sum + d, 0) / STEPS
    // a step is about 0.02; 8-bit colours are known to 0.003, and a chord round zero's bend is shorter than its arc
    for (const d of step) expectNear(d, mean, { abs: 0.004, because: 'even in OKLab' })
  })

  it('is a plain grey at zero', () => {
    const [, a, b] = labOf(colourOfStress(makeScale(low, high), 0))
    expectNear(Math.hypot(a, b), 0, { abs: 0.008, because: 'one of 2048 shades beside it' })
  })

  it('keeps to colours that a screen can show', () => {
    for (const lab of samples(low, high)) {
      // a colour that was cut at the gamut's border has a component at 0 or 255
      const parts = srgbOf(lab).map((part) => Math.round(255 * part))
      expect(parts.every((part) => part > 0 && part < 255), String(parts)).toBe(true)
    }
  })
})

describe('the scale', () => {
  it('tells compression from tension of the same size by lightness and by hue', () => {
    const scale = makeScale(-2, 2)
    for (const stress of [0.3, 1, 1.9]) {
      const tension = labOf(colourOfStress(scale, stress))
      const compression = labOf(colourOfStress(scale, -stress))
      expect(compression[0] - tension[0]).toBeGreaterThan(0.3 * stress)
      expect(tension[1]).toBeGreaterThan(0)
      expect(compression[1]).toBeLessThan(0)
    }
  })

  it('holds the end colours beyond its ends', () => {
    const scale = makeScale(-1, 3)
    expect(colourOfStress(scale, 7)).toBe(colourOfStress(scale, 3))
    expect(colourOfStress(scale, -7)).toBe(colourOfStress(scale, -1))
  })

  it('refuses a range without zero', () => {
    expect(() => makeScale(1, 3)).toThrow(RangeError)
    expect(() => makeScale(0, 0)).toThrow(RangeError)
    expect(() => makeScale(-1, NaN)).toThrow(RangeError)
  })
})

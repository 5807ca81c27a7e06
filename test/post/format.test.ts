import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fixed, percent, plainNumber, withBar } from '../../src/post/format.ts'

describe('withBar', () => {
  it.each([
    [3.1133, 0.0011, '3.113', '0.002'],
    [3.1133, 0.00096, '3.1133', '0.0010'],
    [212.27, 0.08, '212.27', '0.08'],
    [-148.53, 0.92, '−148.5', '1.0'],
    [1234.4, 30, '1230', '40'],
    [2.5, 0.5, '2.5', '0.5'],
    [2.1738, 1e-12, '2.173800', '0.000001']
  ])('%d within %d is %s ± %s', (value, error, text, bar) => {
    expect(withBar(value, error)).toEqual({ value: text, bar })
  })

  it('says so when the bar is not known', () => {
    expect(withBar(2.17384, Infinity)).toEqual({ value: '2.174', bar: 'unknown' })
  })

  it('prints an interval that covers the computed one', () => {
    const number = (text: string) => Number(text.replace('−', '-'))
    fc.assert(
      fc.property(fc.double({ min: -1e5, max: 1e5, noNaN: true }), fc.double({ min: 1e-6, max: 10, noNaN: true }), (value, error) => {
        const printed = withBar(value, error)
        const [middle, half] = [number(printed.value), number(printed.bar)]
        const slack = 1e-9 * (Math.abs(value) + error) + 1e-9 * half
        return middle - half <= value - error + slack && middle + half >= value + error - slack
      }),
      { seed: 11, numRuns: 2000 }
    )
  })
})

describe('numbers in formulas', () => {
  it.each([[24000, '24000'], [44, '44'], [43.99999999999, '44'], [51666.66667, '51666.7'], [-0.5, '−0.5'], [0.0125, '0.0125'], [-0, '0']])(
    '%d is %s',
    (value, text) => expect(plainNumber(value)).toBe(text)
  )

  it('have a typographic minus, and none before zero', () => {
    expect(fixed(-7.984, 2)).toBe('−7.98')
    expect(fixed(-0.001, 2)).toBe('0.00')
  })

  it('are percentages of two digits', () => {
    expect(percent(0.14336)).toBe('14 %')
    expect(percent(0.001)).toBe('0.1 %')
  })
})

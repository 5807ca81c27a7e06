import { describe, expect, it } from 'vitest'
import { coverPolygons } from '../../../src/post/draw/coverage.ts'
import { drawableText, missingGlyphs, openFont } from '../../../src/post/draw/font.ts'
import { fitText, textPolygons, textWidth } from '../../../src/post/draw/text.ts'
import { expectNear } from '../../support/near.ts'

const font = openFont()
const style = (size: number) => ({ font, size, colour: 0 })

describe('the embedded font', () => {
  it('has the signs that figures need', () => {
    const signs = '0123456789.,:;()/%ABCXYZabcxyzé±×−°–—²³…’'
    expect(missingGlyphs(font, signs)).toEqual([])
  })

  it('says which characters it lacks', () => {
    expect(missingGlyphs(font, 'σ₁ ≥ 2σ')).toEqual(['σ', '₁', '≥'])
  })

  it('falls back to the letter without its accent, and keeps what it cannot change', () => {
    expect(drawableText(font, 'Šlaměk')).toBe('Slamek')
    expect(drawableText(font, 'Öse é')).toBe('Öse é')
    expect(drawableText(font, 'a\n\tb\u0007')).toBe('a b')
    expect(drawableText(font, 'σ')).toBe('σ')
  })
})

describe('text', () => {
  it('grows in proportion to its size', () => {
    const width = textWidth(style(20), 'Lift link')
    // letters are about half as wide as the em square
    expect(width).toBeGreaterThan(9 * 20 * 0.35)
    expect(width).toBeLessThan(9 * 20 * 0.65)
    expectNear(textWidth(style(50), 'Lift link'), 2.5 * width, { rel: 1e-9, because: 'outlines scale' })
  })

  it('stands on its baseline, as high as its capitals are drawn', () => {
    const [contour] = textPolygons(style(100), 'H', 10, 200)
    const ys = contour.filter((_, i) => i % 2 === 1)
    expect(Math.max(...ys)).toBe(200)
    expect(Math.min(...ys)).toBe(130)
  })

  it('anchors at its start, middle and end', () => {
    const leftOf = (anchor: 'start' | 'middle' | 'end') =>
      Math.min(...textPolygons(style(40), 'Kt', 300, 100, anchor).map((polygon) => Math.min(...polygon.filter((_, i) => i % 2 === 0))))
    const width = textWidth(style(40), 'Kt')
    expectNear(leftOf('start') - leftOf('middle'), width / 2, { abs: 1e-6, because: 'half the width' })
    expectNear(leftOf('start') - leftOf('end'), width, { abs: 1e-6, because: 'the width' })
  })

  it('is kerned', () => {
    expect(textWidth(style(100), 'AV')).toBeLessThan(textWidth(style(100), 'A') + textWidth(style(100), 'V'))
  })

  it('leaves the eye of an o open', () => {
    const covered = coverPolygons(textPolygons(style(100), 'o', 0, 100))
    const middle = Math.round(covered.height / 2) * covered.width + Math.round(covered.width / 2)
    expect(covered.amount[middle]).toBe(0)
    expect(covered.amount.some((share) => share === 1)).toBe(true)
  })

  it('draws a box for a character that it lacks', () => {
    expect(coverPolygons(textPolygons(style(40), 'σ', 0, 40)).amount.some((share) => share > 0.5)).toBe(true)
  })

  it('is cut to the room there is', () => {
    const name = 'Hanger strap of the upper sluice gate, left side'
    expect(fitText(style(20), name, 1000)).toBe(name)
    const cut = fitText(style(20), name, 150)
    expect(cut.endsWith('…')).toBe(true)
    expect(textWidth(style(20), cut)).toBeLessThanOrEqual(150)
    expect(textWidth(style(20), cut)).toBeGreaterThan(130)
    expect(fitText(style(20), name, 1)).toBe('')
  })
})

import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { nearestWord } from '../../src/case/spelling.ts'

const KEYS = ['name', 'units', 'thickness', 'material', 'plate', 'holes', 'notches', 'load', 'tolerance', 'expect', 'x', 'id']

describe('the word that was meant', () => {
  it.each([
    ['axail', ['axial', 'moment'], 'axial'],
    ['thicknes', KEYS, 'thickness'],
    ['diametre', ['diameter', 'at', 'id'], 'diameter'],
    ['widht', ['width', 'length'], 'width'],
    ['Holes', KEYS, 'holes'],
    ['e', ['E', 'nu'], 'E'],
    ['un', ['nu', 'E'], 'nu'],
    ['y', KEYS, null],
    ['colour', KEYS, null],
    ['', KEYS, null],
    ['x'.repeat(2000), KEYS, null],
    [`thickness${'s'.repeat(2000)}`, KEYS, null]
  ] as const)('%s', (word, words, meant) => expect(nearestWord(word, words)).toBe(meant))

  it('is found through any single slip in a word of three letters or more', () => {
    const letters = [...'abcdefghijklmnopqrstuvwxyz']
    const long = KEYS.filter((key) => key.length > 2)
    fc.assert(
      fc.property(fc.constantFrom(...long), fc.nat(), fc.constantFrom(...letters), fc.constantFrom('drop', 'add', 'change', 'swap'), (key, place, letter, slip) => {
        const i = place % (key.length - 1)
        const swapped = key[i + 1] + key[i]
        const middle = { drop: '', add: key[i] + letter, change: letter, swap: swapped }[slip]
        const word = key.slice(0, i) + middle + key.slice(i + (slip === 'swap' ? 2 : 1))
        expect(nearestWord(word, long)).toBe(key)
      }),
      { seed: 31, numRuns: 500 }
    )
  })
})

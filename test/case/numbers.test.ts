import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { plateNumbers, type PlateNumbers } from '../../src/case/numbers.ts'
import { caseFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'

/** Lengths as whole numbers of a drawing's smallest step; `write` says how one is written in the file. */
interface Drawing {
  readonly sections: readonly { readonly width: number; readonly length: number; readonly offset: number }[]
  readonly fillets: readonly number[]
  readonly hole: { readonly diameter: number; readonly at: readonly [number, number] }
  readonly notch: { readonly x: number; readonly depth: number; readonly radius: number }
}
type Write = (steps: number) => number

const long = fc.integer({ min: 1000, max: 99_999_999 })
const short = fc.integer({ min: 1, max: 9_999_999 })
const anywhere = fc.integer({ min: -99_999_999, max: 99_999_999 })
const drawing: fc.Arbitrary<Drawing> = fc.array(fc.record({ width: long, length: long, offset: anywhere }), { minLength: 1, maxLength: 4 }).chain((sections) =>
  fc.record({
    sections: fc.constant(sections),
    fillets: fc.array(short, { minLength: sections.length - 1, maxLength: sections.length - 1 }),
    hole: fc.record({ diameter: short, at: fc.tuple(anywhere, anywhere) }),
    notch: fc.record({ x: long, depth: short, radius: short })
  })
)

function numbersOf({ sections, fillets, hole, notch }: Drawing, write: Write, unit: string): PlateNumbers {
  return plateNumbers(
    caseFrom({
      units: { length: unit },
      thickness: 1,
      plate: {
        sections: sections.map(({ width, length, offset }) => ({ width: write(width), length: write(length), offset: write(offset) })),
        fillets: fillets.map(write)
      },
      holes: [{ shape: 'circle', diameter: write(hole.diameter), at: hole.at.map(write) }],
      notches: [{ side: 'both', x: write(notch.x), depth: write(notch.depth), radius: write(notch.radius) }],
      load: { axial: 1 }
    })
  )
}
const shapeOf = (numbers: PlateNumbers) => ({ ...numbers, length: 0 })

describe('the numbers of a plate', () => {
  // every drawing has four decimals of a millimetre and up to eight digits
  const mm: Write = (steps) => steps / 1e4
  const ways: [string, Write, string, number][] = [
    ['metres', (steps) => mm(steps) / 1000, 'm', 1],
    ['centimetres', (steps) => mm(steps) / 10, 'cm', 1],
    ['inches', (steps) => mm(steps) / 25.4, 'in', 1],
    ['a thousandth of the size', (steps) => mm(steps) * 1e-3, 'mm', 1e-3],
    ['a thousand times the size', (steps) => mm(steps) * 1e3, 'mm', 1e3],
    ['a tenth of the size, by division', (steps) => mm(steps) / 10, 'mm', 0.1]
  ]
  it.each(ways)('are the same to the bit in %s', (_, write, unit, scale) => {
    fc.assert(
      fc.property(drawing, (drawn) => {
        const plain = numbersOf(drawn, mm, 'mm')
        const other = numbersOf(drawn, write, unit)
        expect(shapeOf(other)).toEqual(shapeOf(plain))
        expectNear(other.length, plain.length * scale, { rel: 1e-15, because: 'a plate unit in mm' })
      }),
      { seed: 41, numRuns: 60 }
    )
  })

  it('are the lengths over the size of the plate, to the grid', () => {
    fc.assert(
      fc.property(drawing, (drawn) => {
        const { sections, holes, notches, fillets, length } = numbersOf(drawn, mm, 'mm')
        const total = drawn.sections.reduce((sum, section) => sum + section.length, 0)
        const top = Math.max(...drawn.sections.map(({ offset, width }) => offset + width / 2))
        const bottom = Math.min(...drawn.sections.map(({ offset, width }) => offset - width / 2))
        const size = Math.max(total, top - bottom)
        expectNear(length, size / 1e4, { rel: 1e-15, because: 'the larger of length and height' })
        const same = (actual: number, steps: number) => expectNear(actual, steps / size, { abs: 1e-12, because: 'a grid of 2^-40' })
        sections.forEach(({ x0, x1, centre, width }, i) => {
          same(x1 - x0, drawn.sections[i].length)
          same(centre, drawn.sections[i].offset)
          same(width, drawn.sections[i].width)
          if (i > 0) expect(x0).toBe(sections[i - 1].x1)
        })
        fillets.forEach((radius, i) => same(radius, drawn.fillets[i]))
        same(2 * holes[0].radius, drawn.hole.diameter)
        same(holes[0].centre[0], drawn.hole.at[0])
        same(holes[0].centre[1], drawn.hole.at[1])
        same(notches[0].depth, drawn.notch.depth)
      }),
      { seed: 42, numRuns: 200 }
    )
  })

  it('of sections that are flush on a side are flush to the bit, and those of centred ones are centred', () => {
    fc.assert(
      fc.property(fc.array(fc.record({ width: long, length: long }), { minLength: 2, maxLength: 4 }), fc.constantFrom<1 | -1>(1, -1), (drawn, side) => {
        const edge = drawn[0].width / 2
        const flush = { sections: drawn.map((section) => ({ ...section, offset: side * (edge - section.width / 2) })), fillets: drawn.slice(1).map(() => 1), hole: { diameter: 1, at: [0, 0] as const }, notch: { x: 1, depth: 1, radius: 1 } }
        const { sections } = numbersOf(flush, mm, 'mm')
        const edges = new Set(sections.map(({ centre, width }) => centre + (side * width) / 2))
        expect(edges.size).toBe(1)
        const centred = { ...flush, sections: drawn.map((section) => ({ ...section, offset: 0 })) }
        for (const { centre } of numbersOf(centred, mm, 'mm').sections) expect(centre).toBe(0)
      }),
      { seed: 43, numRuns: 200 }
    )
  })
})

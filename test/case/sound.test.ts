import { describe, expect, it } from 'vitest'
import { buildPlate } from '../../src/case/build.ts'
import { CaseError, type Problem } from '../../src/case/problem.ts'
import { readCase } from '../../src/case/read.ts'

function problemsOf(parts: object): readonly Problem[] {
  const text = JSON.stringify({ name: 'plate', thickness: 5, load: { axial: 1000 }, plate: { sections: [{ width: 40, length: 200 }] }, ...parts })
  try {
    buildPlate(readCase(text, 'plate.json'))
    return []
  } catch (error) {
    if (error instanceof CaseError) return error.problems
    throw error
  }
}
const hole = (x: number, y: number, diameter: number, id?: string) => ({ shape: 'circle', diameter, at: [x, y], id })
const stepped = { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [10] }

describe('what cannot be', () => {
  const refused: [string, object, string, string][] = [
    ['hole outside the plate', { holes: [hole(100, 30, 5)] }, 'outside', 'holes.0.at'],
    ['hole beyond the end', { holes: [hole(-10, 0, 5)] }, 'outside', 'holes.0.at'],
    ['hole over the edge', { holes: [hole(100, 15, 12)] }, 'overlap', 'holes.0'],
    ['hole over the end', { holes: [hole(198, 0, 12)] }, 'overlap', 'holes.0'],
    ['hole over a hole', { holes: [hole(100, 0, 10), hole(106, 0, 10)] }, 'overlap', 'holes.1'],
    ['hole inside a hole', { holes: [hole(100, 0, 20), hole(101, 0, 5)] }, 'overlap', 'holes.1'],
    ['concentric holes', { holes: [hole(100, 0, 20), hole(100, 0, 5)] }, 'overlap', 'holes.1'],
    ['hole over a notch', { holes: [hole(100, 10, 12)], notches: [{ side: 'top', x: 100, depth: 8, radius: 3 }] }, 'overlap', 'holes.0'],
    ['hole over a fillet', { plate: stepped, holes: [hole(103, 22, 8)] }, 'overlap', 'holes.0'],
    ['ligament of 0.9 % of the hole', { holes: [hole(100, 0, 40 / 1.018)] }, 'thin', 'holes.0'],
    ['gap of 0.9 % between holes', { holes: [hole(100, 0, 10), hole(110.09, 0, 10)] }, 'thin', 'holes.1'],
    ['notch deeper than the plate', { notches: [{ side: 'top', x: 100, depth: 45, radius: 3 }] }, 'too-deep', 'notches.0.depth'],
    ['opposite notches that meet', { notches: [{ side: 'both', x: 100, depth: 20, radius: 3 }] }, 'too-deep', 'notches.0.depth'],
    ['opposite notches that nearly meet', { notches: [{ side: 'both', x: 100, depth: 19.95, radius: 3 }] }, 'thin', 'notches.0'],
    ['notch that nearly cuts through', { notches: [{ side: 'top', x: 100, depth: 39.8, radius: 3 }] }, 'thin', 'notches.0'],
    ['notch off the bar', { notches: [{ side: 'top', x: 205, depth: 5, radius: 3 }] }, 'outside', 'notches.0.x'],
    ['notch over the end', { notches: [{ side: 'top', x: 198, depth: 5, radius: 3 }] }, 'off-edge', 'notches.0.x'],
    ['notch over a fillet', { plate: stepped, notches: [{ side: 'top', x: 111, depth: 5, radius: 3 }] }, 'off-edge', 'notches.0.x'],
    ['notch over a step', { plate: stepped, notches: [{ side: 'top', x: 99, depth: 5, radius: 3 }] }, 'off-edge', 'notches.0.x'],
    ['notch over a notch', { notches: [{ side: 'top', x: 100, depth: 5, radius: 3 }, { side: 'both', x: 105, depth: 5, radius: 3 }] }, 'overlap', 'notches.1'],
    ['staggered notches that meet', { notches: [{ side: 'top', x: 100, depth: 25, radius: 3 }, { side: 'bottom', x: 103, depth: 25, radius: 3 }] }, 'thin', 'notches.0'],
    ['fillet longer than its section', { plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 8 }], fillets: [9] } }, 'fillet-too-large', 'plate.fillets.0'],
    ['two fillets that meet', { plate: { sections: [{ width: 60, length: 50 }, { width: 40, length: 15 }, { width: 60, length: 50 }], fillets: [8, 8] } }, 'fillet-too-large', 'plate.fillets.0'],
    ['sections that do not meet', { plate: { sections: [{ width: 20, length: 50 }, { width: 20, length: 50, offset: 30 }], fillets: [2] } }, 'apart', 'plate.sections.1.offset']
  ]
  it.each(refused)('%s', (_, parts, code, path) => {
    const found = problemsOf(parts).map((problem) => `${problem.code} ${problem.path.join('.')}`)
    expect(found).toContain(`${code} ${path}`)
    for (const { message, line } of problemsOf(parts)) {
      expect(line).toBe(1)
      expect(message).toMatch(/^expected .*, got /)
      // no digits of rounding in a sentence
      expect(message).not.toMatch(/\d{7}|NaN|Infinity|\de-\d/)
    }
  })

  const taken: [string, object][] = [
    ['ligament of 1.1 % of the hole', { holes: [hole(100, 0, 40 / 1.022)] }],
    ['gap of 1.1 % between holes', { holes: [hole(100, 0, 10), hole(110.11, 0, 10)] }],
    ['hole in what a fillet adds', { plate: stepped, holes: [hole(102.2, 20.5, 2)] }],
    ['hole across a step', { plate: stepped, holes: [hole(100, 0, 30)] }],
    ['notch beside a fillet', { plate: stepped, notches: [{ side: 'top', x: 113.1, depth: 5, radius: 3 }] }],
    ['staggered notches with a ligament', { notches: [{ side: 'top', x: 100, depth: 25, radius: 3 }, { side: 'bottom', x: 107, depth: 25, radius: 3 }] }],
    ['fillet of exactly the section', { plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 10 }], fillets: [10] } }]
  ]
  it.each(taken)('taken: %s', (_, parts) => expect(problemsOf(parts)).toEqual([]))

  it('says all of it at once, in the case\'s unit', () => {
    const problems = problemsOf({ units: { length: 'cm' }, holes: [hole(100, 19, 4, 'eye'), hole(100, -30, 4), hole(50, 0, 60)] })
    expect(problems.map(({ field }) => field)).toEqual(['holes eye', 'holes[2].at', 'holes[3]'])
    expect(problems[0].message).toBe('expected a ligament of at least 0.04 cm (1 % of the diameter) to the top edge, got an overlap of 1 cm')
  })
})

describe('lengths that vanish beside the plate', () => {
  const strip = (width: number, length: number) => ({ plate: { sections: [{ width, length }] } })
  const step = (radius: number) => ({ plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [radius] } })
  const notch = (depth: number, radius: number) => ({ notches: [{ side: 'top', x: 100, depth, radius }] })
  const refused: [string, object, string][] = [
    ['width', strip(1e-9, 1e3), 'plate.sections.0.width'],
    ['width, at the ends of the range', strip(1e-12, 1e12), 'plate.sections.0.width'],
    ['length', strip(1e12, 1e-12), 'plate.sections.0.length'],
    ['fillet', step(1e-12), 'plate.fillets.0'],
    ['hole', { holes: [hole(100, 0, 1e-12)] }, 'holes.0.diameter'],
    ['depth of a notch', notch(1e-12, 3), 'notches.0.depth'],
    ['radius of a notch', notch(5, 1e-4), 'notches.0.radius']
  ]
  it.each(refused)('%s', (_, parts, path) => {
    const problems = problemsOf(parts)
    expect(problems.map((problem) => `${problem.code} ${problem.path.join('.')}`)).toEqual([`too-small ${path}`])
    expect(problems[0].message).toMatch(/^expected a length of at least \S+ mm \(a millionth of the plate's size\), got \S+ mm$/)
  })

  it('taken: a sharp step, and what is a little above the limit', () => {
    for (const parts of [step(0), step(2.1e-4), { holes: [hole(100, 0, 2.1e-4)] }, notch(2.1e-4, 2.1e-4)]) expect(problemsOf(parts)).toEqual([])
  })
})

import { describe, expect, it } from 'vitest'
import { buildPlate } from '../../src/case/build.ts'
import { CaseError, formatProblems, type Problem } from '../../src/case/problem.ts'
import { readCase } from '../../src/case/read.ts'

const strip = { name: 'strip', thickness: 5, load: { axial: 1000 }, plate: { sections: [{ width: 40, length: 200 }] } }
const stepped = (width: number, length: number, fillet: number) => ({ plate: { sections: [{ width: 40, length: 100 }, { width, length }], fillets: [fillet] } })

function problemsOf(text: string): readonly Problem[] {
  try {
    buildPlate(readCase(text, 'strip.yaml'))
    return []
  } catch (error) {
    if (error instanceof CaseError) return error.problems
    throw error
  }
}
const problemsWith = (parts: object) => problemsOf(JSON.stringify({ ...strip, ...parts }))
const codesWith = (parts: object) => problemsWith(parts).map(({ code, path }) => `${code} ${path.join('.')}`)

describe('text that would exhaust the parser', () => {
  it.each([
    ['flow lists', `name: ${'['.repeat(60_000)}`],
    ['closed flow lists', `name: ${'['.repeat(500)}${']'.repeat(500)}`],
    ['maps', `${'{"a":'.repeat(20_000)}1${'}'.repeat(20_000)}`],
    ['a list over many lines', `name: ${'[\n'.repeat(40_000)}`],
    ['block lists on a line', `name:\n${'- '.repeat(60_000)}`],
    ['explicit keys', '? '.repeat(60_000)]
  ])('%s', (_, text) => expect(problemsOf(text).map(({ code }) => code)).toEqual(['too-deep']))

  it('by indentation is a matter of unknown keys', () => {
    const nested = Array.from({ length: 480 }, (_, i) => `${' '.repeat(i)}a:\n`).join('')
    expect(problemsOf(`name: strip\n${nested}`).map(({ path }) => path.join('.'))).toContain('a')
  })

  it('brackets in words and long lists do no harm', () => {
    const holes = Array.from({ length: 300 }, (_, i) => `  - { id: pin-${i}, shape: circle, diameter: 0.2, at: [${10 + i / 2}, 0] }\n`).join('')
    expect(problemsOf(`name: "strip [[[ {{{ from old stock"\nthickness: 5\nload: { axial: 10 }\nplate: { sections: [{ width: 40, length: 200 }] }\nholes:\n${holes}`)).toEqual([])
  })

  it('more than 128 kB, counted in bytes', () => {
    const [problem] = problemsOf(`name: ${'ü'.repeat(70_000)}`)
    expect(problem.code).toBe('too-large')
    expect(problem.message).toBe('expected at most 128 kB, got 137 kB')
  })

  it('two thousand notches are judged in a moment', () => {
    const notches = Array.from({ length: 2000 }, (_, i) => ({ side: i % 2 ? 'top' : 'bottom', x: i + 1, depth: 0.3, radius: 0.3 }))
    const start = performance.now()
    expect(problemsWith({ plate: { sections: [{ width: 40, length: 2002 }] }, notches })).toEqual([])
    expect(performance.now() - start).toBeLessThan(6000)
  })
})

describe('many problems', () => {
  it('are counted, and fifty of them written', () => {
    const holes = Array.from({ length: 2000 }, () => ({ shape: 'circle', diameter: 5, at: [100, 0] }))
    const problems = problemsWith({ holes })
    // each hole names one that it lies over, not all of them
    expect(problems).toHaveLength(1999)
    const lines = formatProblems(new CaseError('strip.yaml', problems)).split('\n')
    expect(lines).toHaveLength(52)
    expect([lines[0], lines[51]]).toEqual(['strip.yaml: 1999 problems', '  and 1949 more'])
  })

  it('of a syntax that went wrong early, too', () => {
    const lines = formatProblems(new CaseError('strip.yaml', problemsOf('"a" '.repeat(9000)))).split('\n')
    expect(lines.length).toBeLessThanOrEqual(52)
    for (const line of lines) expect(line.length).toBeLessThan(200)
  })

  it('of the two sides of a bar are one', () => {
    expect(codesWith(stepped(30, 8, 9))).toEqual(['fillet-too-large plate.fillets.0'])
    expect(codesWith(stepped(30, 100, 5 - 1e-7))).toEqual(['sliver plate.fillets.0'])
  })
})

describe('the wall that a notch leaves beside a step or an end', () => {
  const boss = { sections: [{ width: 30, length: 50 }, { width: 60, length: 10 }, { width: 30, length: 50 }], fillets: [0, 0] }
  // a U of depth 5 on a boss of 10: at least 0.05 on either side
  const nick = (half: number) => ({ plate: boss, notches: [{ side: 'top', x: 55, depth: 5, radius: half }] })

  it('is refused below 1 % of the depth, taken above', () => {
    expect(codesWith(nick(4.96))).toEqual(['thin notches.0'])
    expect(problemsWith(nick(4.96))[0].message).toBe("expected a gap of at least 0.05 mm (1 % of the notch's depth) beside the mouth on the straight top edge of section 2, got 0.04 mm")
    expect(codesWith(nick(4.94))).toEqual([])
    expect(codesWith({ notches: [{ side: 'bottom', x: 3.04, depth: 5, radius: 3 }] })).toEqual(['thin notches.0'])
    expect(codesWith({ notches: [{ side: 'bottom', x: 3.06, depth: 5, radius: 3 }] })).toEqual([])
  })
})

describe('keys that do not go together', () => {
  it.each([
    [{ load: { axial: 1, pin: { hole: 'a', force: 1 } } }, 'mixed load.pin', 'expected keys that go together, got "pin" beside "axial"'],
    [{ load: { moment: 1, hold: 'left' } }, 'mixed load.hold', 'expected keys that go together, got "hold" beside "moment"'],
    [{ load: { pins: [{ hole: 'a', force: 1 }], supports: [] } }, 'mixed load.supports', 'expected keys that go together, got "supports" beside "pins"'],
    [{ load: { remote: { xx: 1 }, edges: [{ edge: 'seat' }] } }, 'mixed load.remote', 'expected keys that go together, got "remote" beside "edges"'],
    [{ plate: { ...strip.plate, corners: [[0, 0], [1, 0], [0, 1]] } }, 'mixed plate.corners', 'expected keys that go together, got "corners" beside "sections"'],
    [{ plate: { outline: 'M 0 0 H 5 V 5 Z', fillets: [2] } }, 'mixed plate.fillets', 'expected keys that go together, got "fillets" beside "outline"']
  ])('%j', (parts, code, message) => {
    const problems = problemsWith(parts)
    expect(problems.map((problem) => `${problem.code} ${problem.path.join('.')}`)).toContain(code)
    expect(problems.map((problem) => problem.message)).toContain(message)
  })

  it('a hold or supports alone ask for what they belong to', () => {
    expect(codesWith({ load: { hold: 'left' } })).toEqual(['type load.pin'])
    expect(codesWith({ load: { supports: [{ edge: 'heel', fix: 'xy' }] } })).toEqual(['type load.edges'])
  })

  it('a plate or load that is none names the ways to write one', () => {
    const [plate, load] = problemsWith({ plate: undefined, load: 5 })
    expect([plate.message, load.message].toSorted()).toEqual([
      'expected axial, moment, pin, pins, edges, remote, hold or supports in it, got 5',
      'expected sections, corners or outline in it, got nothing'
    ])
  })
})

describe('numbers out of all proportion', () => {
  it.each([
    [1e300, 'expected a length > 0 (mm), at most 1000000000000, got 1e+300'],
    [1e-300, 'expected a length > 0 (mm), at least 1e-12, got 1e-300'],
    [-1e300, 'expected a length > 0 (mm), got -1e+300']
  ])('a thickness of %s', (thickness, message) => expect(problemsWith({ thickness }).map((problem) => problem.message)).toEqual([message]))

  it('a force keeps its own limit', () => {
    expect(problemsWith({ load: { axial: -1e300 } })[0].message).toBe('expected a force (N), at least -1000000000000, got -1e+300')
  })
})

describe('edges that are left over by a hair', () => {
  it.each([
    ['a face', stepped(30, 100, 5 - 1e-7), 'plate.fillets.0', 'expected edges of at least 0.00002 mm (or none), got 1e-7 mm of a face of the shoulder between sections 1 and 2'],
    ['an edge beside a fillet', stepped(30, 5 + 1e-6, 5), 'plate.sections.1', 'expected edges of at least 0.000011 mm (or none), got 0.000001 mm of the bottom edge of section 2'],
    ['a flank', { notches: [{ id: 'nick', side: 'top', x: 50, depth: 5 + 1e-7, radius: 5 }] }, 'notches.0', 'expected edges of at least 0.00002 mm (or none), got 1e-7 mm of a flank of notch nick']
  ])('%s', (_, parts, path, message) => {
    const problems = problemsWith(parts)
    expect(problems.map((problem) => problem.code)).toContain('sliver')
    expect(problems[0].path.join('.')).toBe(path)
    expect(problems.map((problem) => problem.message)).toContain(message)
  })

  it('none at all, and a little more than a hair, are taken', () => {
    for (const parts of [stepped(30, 100, 5), stepped(30, 100, 5 - 1e-10), stepped(30, 100, 5 + 1e-10), stepped(30, 100, 5 - 1e-4), stepped(30, 5, 5), stepped(30, 5.0001, 5)]) {
      expect(problemsWith(parts)).toEqual([])
    }
  })
})

describe('a hole far away', () => {
  it('is outside, wherever it is', () => {
    for (let turn = 0; turn < 16; turn++) {
      for (const away of [0.7, 3, 7.9, 8.1, 40, 1e4]) {
        const at = [100 + 200 * away * Math.cos((turn * Math.PI) / 8), 200 * away * Math.sin((turn * Math.PI) / 8)]
        expect(codesWith({ holes: [{ shape: 'circle', diameter: 5, at }] })).toEqual(['outside holes.0.at'])
      }
    }
    // a ray of eight plate lengths from there would end inside the bar
    expect(codesWith({ holes: [{ shape: 'circle', diameter: 5, at: [-7.2 * 200, -3.15 * 200] }] })).toEqual(['outside holes.0.at'])
  })

  it('is inside, where the bar is far away too', () => {
    const plate = { sections: [{ width: 40, length: 200, offset: 3000 }] }
    expect(codesWith({ plate, holes: [{ shape: 'circle', diameter: 5, at: [100, 3010] }] })).toEqual([])
  })
})

describe('sections without a step between them', () => {
  const plate = { sections: [{ width: 40, length: 50 }, { width: 40, length: 50 }, { width: 30, length: 50 }], fillets: [0, 2] }
  const expectOf = (raiser: string) => ({ plate, expect: [{ raiser, kt: 2, within: '1%', source: 'a guess', from: 'practice' }] })

  it('make no shoulder: the only step is shoulder-1', () => {
    expect(codesWith(expectOf('shoulder-1'))).toEqual([])
    expect(codesWith(expectOf('shoulder-2'))).toEqual(['unknown-raiser expect.0.raiser'])
    expect(codesWith({ plate, holes: [{ id: 'shoulder-2', shape: 'circle', diameter: 3, at: [20, 0] }] })).toEqual([])
  })
})

describe('YAML that looks like a case', () => {
  const written = (lines: string[]) => ['name: strip', 'thickness: 5', 'load: { axial: 10 }', 'plate: { sections: [{ width: 40, length: 200 }] }', ...lines, ''].join('\n')

  it.each([
    ['a byte order mark', `\ufeff${written([])}`],
    ['comments and markers', `# a strip\n---\n${written(['...'])}`],
    ['exponents and plus signs', written(['holes: [{ shape: circle, diameter: +5e-1, at: [1.0E+2, -0] }]'])],
    ['an alias for a whole hole', written(['holes: [&eye { shape: circle, diameter: 5, at: [50, 0] }]', 'expect: []'])]
  ])('taken: %s', (_, text) => expect(problemsOf(text)).toEqual([]))

  it.each([
    ['a merge key', written(['holes: [{ <<: { shape: circle }, diameter: 5, at: [50, 0] }]']), 'holes.0.shape'],
    ['a list as a key', written(['? [a, b]', ': 3']), '[ a, b ]'],
    ['a number as a key', written(['3: 4']), '3'],
    ['a date', written(['tolerance: 2001-01-01']), 'tolerance'],
    ['binary data', written(['tolerance: !!binary aGVsbG8=']), 'tolerance'],
    ['yes for a number', written(['tolerance: yes']), 'tolerance'],
    ['an integer of thirty digits', written(['material: { E: 123456789012345678901234567890 }']), 'material.E']
  ])('refused: %s', (_, text, path) => expect(problemsOf(text).map((problem) => problem.path.join('.'))).toContain(path))

  it('an error of syntax has its place, and no stack', () => {
    const [problem] = problemsOf('name: strip\nplate:\n\tsections: []\n')
    expect([problem.code, problem.line, problem.message]).toEqual(['yaml', 3, 'expected spaces for indentation, got a tab'])
    for (const text of ['name: "strip', 'name: [a, b', 'a: b: c', '{ name: strip', 'name: *', '%YAML 9', '&a', '!!', '- a\nb: c', '@', '`', '\t', ':', '{]', '"\\x"']) {
      const problems = problemsOf(text)
      expect(problems.length).toBeGreaterThan(0)
      expect(formatProblems(new CaseError('strip.yaml', problems))).not.toMatch(/ at .*:\d+:\d+\)|undefined|\[object/)
    }
  })
})

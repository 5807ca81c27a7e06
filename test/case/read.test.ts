import fc from 'fast-check'
import { readdirSync, readFileSync } from 'node:fs'
import { join, resolve } from 'node:path'
import { describe, expect, it } from 'vitest'
import { parse } from 'yaml'
import { buildPlate } from '../../src/case/build.ts'
import { CaseError, formatProblems } from '../../src/case/problem.ts'
import { readCase } from '../../src/case/read.ts'
import { caseJsonSchema, type PlateCase } from '../../src/case/schema.ts'
import { expectNear } from '../support/near.ts'

const CASES = resolve(import.meta.dirname, '../../cases')
const link = readFileSync(join(CASES, 'lift-link-relief.yaml'), 'utf8')

function refusal(text: string): CaseError {
  try {
    readCase(text, 'link.yaml')
  } catch (error) {
    if (error instanceof CaseError) return error
    throw error
  }
  throw new Error('the case was taken')
}
const rows = (text: string) => refusal(text).problems.map(({ code, path, line, column }) => `${line}:${column} ${code} ${path.join('.')}`)

const good = {
  name: 'plate',
  thickness: 8,
  material: { E: 205000, nu: 0.29, yield: 355 },
  plate: { sections: [{ width: 60, length: 110 }, { width: 40, length: 110 }], fillets: [8] },
  holes: [{ id: 'relief', shape: 'circle', diameter: 16, at: [95, 0] }],
  notches: [{ side: 'both', x: 40, depth: 5, radius: 3, angle: 30 }],
  load: { axial: 24000, moment: 10 }
}
const withField = (change: object) => JSON.stringify({ ...good, ...change })

describe('a case', () => {
  it('gets its defaults: units, ids, material, tolerance', () => {
    const read = readCase('name: bar\nthickness: 2\nplate: { sections: [{ width: 10, length: 40 }] }\nholes: [{ shape: circle, diameter: 3, at: [20, 0] }]\nload: { axial: 5 }\nunits: { stress: Pa }\n', 'bar.yaml')
    expect(read.units).toEqual({ length: 'mm', force: 'N', stress: 'Pa' })
    expect(read.holes[0].id).toBe('hole-1')
    expect(read.material).toEqual({ E: 200e9, nu: 0.3, yield: null })
    expect(read.tolerance).toBe(0.001)
    expect(read.load).toEqual({ axial: 5, moment: 0 })
  })

  it.each([['0.001', 0.001], ['1e-3', 0.001], ['0.1%', 0.001], ['"0.1 %"', 0.001], ['1e-5', 1e-5]])('tolerance: %s', (text, value) => {
    expectNear(readCase(`${link}\ntolerance: ${text}\n`, 'link.yaml').tolerance, value, { rel: 1e-15, because: 'the same share' })
  })

  it.each(['0', '1', '5', '-0.1', '1e-8', 'abc', '.nan', '[1]'])('tolerance: %s is refused', (text) => {
    expect(refusal(`${link}\ntolerance: ${text}\n`).problems[0].path).toEqual(['tolerance'])
  })

  it('may name its schema and use anchors', () => {
    const text = 'name: bar\n$schema: x\nthickness: &t 2\nplate: { sections: [{ width: 10, length: 40 }] }\nnotches: [{ side: top, x: 20, depth: *t, radius: *t }]\nload: { moment: 5 }\n'
    expect(readCase(text, 'bar.yaml').notches[0].depth).toBe(2)
  })
})

describe('problems', () => {
  it('misspelt keys are pointed at, with the key that was meant', () => {
    const error = refusal('name: bar\nthicknes: 2\nplate:\n  sections: [{ widht: 10, length: 40 }]\nload:\n  axail: 5\n')
    expect(error.problems.map(({ code, path, line, column }) => `${line}:${column} ${code} ${path.join('.')}`)).toEqual([
      '2:1 unknown-key thicknes',
      '4:14 type plate.sections.0.width',
      '4:16 unknown-key plate.sections.0.widht',
      '6:3 unknown-key load.axail'
    ])
    expect(error.problems[3].message).toBe('expected axial, moment, pin, hold, pins, edges, supports or remote, got "axail" (did you mean "axial"?)')
  })

  it('one stands on one line, several under a heading', () => {
    expect(formatProblems(refusal(link.replace('diameter: 16', 'diameter: -3')))).toMatch(/^link\.yaml:\d+:\d+ holes relief\.diameter: expected a length > 0 \(mm\), got -3$/)
    expect(formatProblems(refusal(withField({ thickness: 0, holes: [{ shape: 'round' }] })))).toMatch(/^link\.yaml: 2 problems\n {2}1:\d+ +thickness: .*\n {2}1:\d+ +holes\[1\]\.shape: expected one of circle, ellipse, .*, got "round"$/)
  })

  it.each([
    ['', 'type'],
    ['null', 'type'],
    ['[1, 2]', 'type'],
    ['just words', 'type'],
    ['\u0000\u0001PNG', 'binary'],
    [`name: ${'x'.repeat(140_000)}`, 'too-large'],
    ['name: a\n---\nname: b\n', 'yaml'],
    ['name: a\nname: b\n', 'yaml'],
    ['name: [a\n', 'yaml'],
    ['name: *nobody\n', 'aliases'],
    [`a: &a [x, x, x, x, x, x, x, x, x]\n${'bcdefgh'.split('').map((k, i) => `${k}: &${k} [${Array.from({ length: 9 }, () => `*${'abcdefg'[i]}`).join(', ')}]`).join('\n')}\n`, 'aliases']
  ])('not a case: %j', (text, code) => expect(refusal(text).problems[0].code).toBe(code))

  it('keys that a program could trip over are unknown keys', () => {
    for (const key of ['__proto__', 'constructor', 'toString']) {
      const error = refusal(link.replace('load:', `"${key}": { x: 1 }\nload:`))
      expect(error.problems.some(({ message }) => message.includes(key))).toBe(true)
    }
  })

  const fields: [string, object, string][] = [
    ['thickness missing', { thickness: undefined }, 'thickness'],
    ['name missing', { name: undefined }, 'name'],
    ['plate missing', { plate: undefined }, 'plate'],
    ['load missing', { load: undefined }, 'load'],
    ['no load', { load: { axial: 0 } }, 'load'],
    ['nu of 0.5', { material: { nu: 0.5 } }, 'material.nu'],
    ['text for a number', { thickness: '8 mm' }, 'thickness'],
    ['map for a list', { holes: { id: 'a' } }, 'holes'],
    ['huge length', { thickness: 1e300 }, 'thickness'],
    ['tiny length', { thickness: 1e-300 }, 'thickness'],
    ['radii for the wrong number of steps', { plate: { ...good.plate, fillets: [8, 8] } }, 'plate.fillets'],
    ['radii missing', { plate: { sections: good.plate.sections } }, 'plate.fillets'],
    ['id used twice', { notches: [{ ...good.notches[0], id: 'relief' }] }, 'notches.0.id'],
    ['id of a shoulder', { holes: [{ ...good.holes[0], id: 'shoulder-1' }] }, 'holes.0.id'],
    ['raiser that is not there', { expect: [{ raiser: 'releif', kt: 3, within: '1%', source: 'x', from: 'memory' }] }, 'expect.0.raiser'],
    ['two values expected at once', { expect: [{ raiser: 'relief', kt: 3, peak: 4, within: '1%', source: 'x', from: 'memory' }] }, 'expect.0'],
    ['axial and pin together', { load: { axial: 1, pin: { hole: 'relief', force: 1 }, hold: 'left' } }, 'load.pin'],
    ['sections and corners together', { plate: { ...good.plate, corners: [[0, 0], [1, 0], [0, 1]] } }, 'plate.corners']
  ]
  it.each(fields)('%s', (_, change, path) => {
    expect(refusal(withField(change)).problems.map((problem) => problem.path.join('.'))).toContain(path)
  })

  it.each(['.nan', '.inf', '-.inf', '0', '-3', 'abc', 'true', '[]', '1e300'])('a diameter of %s', (value) => {
    expect(refusal(link.replace('diameter: 16', `diameter: ${value}`)).problems[0].path).toEqual(['holes', 0, 'diameter'])
  })

  const unsupported: [object, string][] = [
    [{ holes: [{ id: 'eye', shape: 'ellipse', axes: [12, 8], at: [18, 0] }] }, 'holes.0.shape'],
    [{ holes: [{ shape: 'slot', length: 24, width: 8, angle: 90, at: [68, 0] }] }, 'holes.0.shape'],
    [{ holes: [{ shape: 'rectangle', size: [24, 16], corner: 4, at: [150, 0] }] }, 'holes.0.shape'],
    [{ holes: [{ shape: 'outline', path: 'M 0 0 H 5 V 5 Z', at: [190, 0] }] }, 'holes.0.shape'],
    [{ plate: { ...good.plate, ends: { right: 'round' } } }, 'plate.ends.right'],
    [{ plate: { corners: [[0, 0], [9, 0, 1], { at: [9, 9], radius: 1, id: 'heel', edge: 'seat' }] } }, 'plate.corners'],
    [{ plate: { outline: 'M 0 0 H 5 V 5 Z' } }, 'plate.outline'],
    [{ load: { pin: { hole: 'relief', force: 24, angle: 0 }, hold: 'left' } }, 'load.pin'],
    [{ load: { pins: [{ hole: 'relief', force: 24 }] } }, 'load.pins'],
    [{ load: { edges: [{ edge: 'seat', normal: 80 }], supports: [{ edge: 'heel', fix: 'xy' }] } }, 'load.edges'],
    [{ load: { remote: { xx: 100 } } }, 'load.remote'],
    [{ nominal: { stress: 80 } }, 'nominal']
  ]
  it.each(unsupported)('not supported yet: %j', (change, path) => {
    const [problem] = refusal(withField(change)).problems
    expect(`${problem.code} ${problem.path.join('.')}`).toBe(`unsupported ${path}`)
    expect(problem.message).toContain('not supported yet')
  })

  it('what is not supported yet is checked all the same', () => {
    expect(rows(withField({ holes: [{ shape: 'ellipse', at: [18, 0] }] }))[0]).toContain('holes.0.axes')
    expect(rows(withField({ load: { pin: { hole: 'relief' }, hold: 'left' } }))[0]).toContain('load.pin.force')
  })

  it('any field spoilt in any way gives a refusal that names it, or a case without NaN', () => {
    const paths = pathsOf(good)
    const junk = fc.constantFrom<unknown>(null, '', 'x', -1, 0, 1e300, 1e-300, true, [], {}, [1], { a: 1 }, [[[]]], undefined)
    fc.assert(
      fc.property(fc.constantFrom(...paths), junk, (path, value) => {
        const spoilt = structuredClone(good) as Record<string, unknown>
        let at = spoilt as Record<string | number, unknown>
        for (const key of path.slice(0, -1)) at = at[key] as Record<string | number, unknown>
        at[path[path.length - 1]] = value
        let read: PlateCase
        try {
          read = readCase(JSON.stringify(spoilt), 'spoilt.json')
        } catch (error) {
          if (!(error instanceof CaseError)) throw error
          const named = error.problems.some((problem) => path.every((key, i) => i >= problem.path.length || problem.path[i] === key))
          expect(named, `${path.join('.')}: ${error.message}`).toBe(true)
          return
        }
        expect(JSON.stringify(read)).not.toMatch(/NaN|Infinity/)
        try {
          expect(JSON.stringify(buildPlate(read))).not.toMatch(/null,null/)
        } catch (error) {
          if (!(error instanceof CaseError)) throw error
        }
      }),
      { seed: 14, numRuns: 400 }
    )
  })
})

function pathsOf(value: unknown, path: (string | number)[] = []): (string | number)[][] {
  if (Array.isArray(value)) return value.flatMap((item, i) => [[...path, i], ...pathsOf(item, [...path, i])])
  if (typeof value === 'object' && value !== null) return Object.entries(value).flatMap(([key, item]) => [[...path, key], ...pathsOf(item, [...path, key])])
  return []
}

describe('the JSON Schema', () => {
  it('names every top key and forbids others', () => {
    const schema = caseJsonSchema() as { properties: object; additionalProperties: boolean }
    expect(Object.keys(schema.properties)).toEqual(expect.arrayContaining(['name', 'units', 'thickness', 'material', 'plate', 'holes', 'notches', 'load', 'nominal', 'tolerance', 'expect']))
    expect(schema.additionalProperties).toBe(false)
  })
})

describe('the JSON Schema and the cases of the project', () => {
  type Node = { properties?: Record<string, unknown>; additionalProperties?: unknown; type?: string }
  const objects: Node[] = []
  const walk = (node: unknown): void => {
    if (Array.isArray(node)) node.forEach(walk)
    else if (typeof node === 'object' && node !== null) {
      if ('properties' in node) objects.push(node as Node)
      Object.values(node).forEach(walk)
    }
  }
  walk(caseJsonSchema())

  it('every group of keys is closed', () => {
    expect(objects.length).toBeGreaterThan(15)
    for (const { additionalProperties } of objects) expect(additionalProperties).toBe(false)
  })

  it('every key of the cases is known, and only the fields without a default are required', () => {
    const top = caseJsonSchema() as { required: string[] }
    expect(top.required.toSorted()).toEqual(['load', 'name', 'plate'])
    const known = new Set(objects.flatMap(({ properties }) => Object.keys(properties!)))
    for (const file of readdirSync(CASES, { recursive: true, encoding: 'utf8' }).filter((name) => name.endsWith('.yaml'))) {
      const keys = pathsOf(parse(readFileSync(join(CASES, file), 'utf8'))).flat().filter((key) => typeof key === 'string')
      expect(keys.filter((key) => !known.has(key))).toEqual([])
    }
  })
})

describe('the cases of the project', () => {
  const files = readdirSync(CASES, { recursive: true, encoding: 'utf8' }).filter((file) => file.endsWith('.yaml'))
  it.each(files)('%s is taken', (file) => {
    expect(buildPlate(readCase(readFileSync(join(CASES, file), 'utf8'), file)).raisers.length).toBeGreaterThan(0)
  })
})

describe('places in the file', () => {
  const text = [
    'name: strap',
    'thickness: 0',
    'material:',
    '  nu: x',
    'notchs: []',
    'plate: { sections: [{ width: 40, length: -2 }] }',
    'holes:',
    '  - shape: circle',
    '    diametre: 3',
    '    at: [10]',
    'load: 3',
    ''
  ].join('\n')
  const expected = [
    '2:12 type thickness',
    '4:7 type material.nu',
    '5:1 unknown-key notchs',
    '6:42 type plate.sections.0.length',
    '8:5 type holes.0.diameter',
    '9:5 unknown-key holes.0.diametre',
    '10:9 type holes.0.at',
    '11:7 type load'
  ]

  it('block and flow style: all problems, in file order', () => expect(rows(text)).toEqual(expected))
  it('are the same with line ends of two characters', () => expect(rows(text.replaceAll('\n', '\r\n'))).toEqual(expected))

  it('JSON over several lines: the key, not its value', () => {
    const json = JSON.stringify({ ...good, load: { axail: 1 } }, null, 2)
    const line = json.split('\n').findIndex((words) => words.includes('axail')) + 1
    expect(rows(json)).toEqual([`${line}:5 unknown-key load.axail`])
  })

  it('a problem of geometry has its place too', () => {
    const deep = 'name: strap\nthickness: 2\nplate: { sections: [{ width: 40, length: 90 }] }\nnotches:\n  - { side: both, x: 45, depth: 20, radius: 3 }\nload: { axial: 5 }\n'
    try {
      buildPlate(readCase(deep, 'strap.yaml'))
      expect.unreachable()
    } catch (error) {
      if (!(error instanceof CaseError)) throw error
      expect(formatProblems(error)).toBe('strap.yaml:5:33 notches[1].depth: expected a depth below half the width of section 1 (20 mm), got 20 mm')
    }
  })
})

describe('a problem stays on one line', () => {
  const breaks = 'a\nb\tc'
  it.each([
    ['value', { thickness: breaks }],
    ['id', { holes: [{ ...good.holes[0], id: breaks, diameter: -1 }] }],
    ['key', { [breaks]: 1 }],
    ['raiser', { expect: [{ raiser: breaks, kt: 3, within: '1%', source: 'x', from: 'memory' }] }]
  ])('whatever the %s has in it', (_, change) => {
    const error = refusal(withField(change))
    const lines = formatProblems(error).split('\n')
    expect(lines).toHaveLength(error.problems.length === 1 ? 1 : error.problems.length + 1)
    expect(lines.join(' ')).not.toContain('\t')
  })

  it('long values are cut', () => {
    expect(refusal(withField({ thickness: 'x'.repeat(5000) })).problems[0].message).toBe(`expected a length > 0 (mm), got "${'x'.repeat(37)}..."`)
  })
})

describe('a load', () => {
  it.each([[5e-324, 0], [0, 1e-300], [0, 0]])('of %s N and %s N mm is none', (axial, moment) => {
    expect(refusal(withField({ load: { axial, moment } })).problems.map(({ code }) => code)).toEqual(['no-load'])
  })
  it('however small beside the other is kept', () => {
    const { bar } = buildPlate(readCase(withField({ load: { axial: 1e-300, moment: 5 } }), 'link.json'))
    expect(Number.isFinite(bar!.axial) && Number.isFinite(bar!.moment)).toBe(true)
  })
})

// Text to checked case: YAML 1.2 (and so JSON), the schema, and what this version can solve; every complaint with its place.

import { isMap, isScalar, LineCounter, parseDocument, type Document } from 'yaml'
import type { z } from 'zod'
import { shoulderSteps } from './bar.ts'
import { plateNumbers } from './numbers.ts'
import { CaseError, quote, quoteKey, type FieldPath } from './problem.ts'
import { isRecord, LOAD_BRANCHES, PLATE_BRANCHES, schemaFor, type CaseFile, type PlateCase } from './schema.ts'
import { placeFindings, rememberSource, type Finding, type Source } from './source.ts'
import { nearestWord } from './spelling.ts'
import { STRESS_UNITS } from './units.ts'
import { findUnsupported } from './unsupported.ts'

/** Largest case file, bytes: the parser's time grows steeply beyond. */
const MOST_BYTES = 128 * 1024
/** Uses of one YAML alias; more are a bomb, not a case. */
const MOST_ALIASES = 100
/** Deepest nesting of lists and maps; the parser recurses, and a case has six levels. */
const MOST_LEVELS = 100
/** Loads below this, in the case's units, are none: stresses from them would underflow. */
const SMALLEST_LOAD = 1e-12
/** Default modulus, MPa. */
const DEFAULT_E = 200_000

/**
 * The case written in `text`; `file` names it in problems.
 * @throws CaseError with every problem found
 */
export function readCase(text: string, file: string): PlateCase {
  const source = parseText(text, file)
  const refuse = (findings: readonly Finding[]): never => {
    throw new CaseError(file, placeFindings(findings, source))
  }
  if (!isRecord(source.raw)) return refuse([{ code: 'type', path: [], message: `expected a case (name, plate, load, ...), got ${show(source.raw)}` }])
  const parsed = schemaFor(source.raw).safeParse(source.raw, { error: describeIssue })
  if (!parsed.success) return refuse(parsed.error.issues.flatMap((issue) => findingsOf(issue, source.raw)))
  const unsupported = findUnsupported(parsed.data)
  if (unsupported.length > 0) return refuse(unsupported)
  const plateCase = completeCase(parsed.data)
  const findings = findInconsistencies(parsed.data, plateCase)
  if (findings.length > 0) return refuse(findings)
  return rememberSource(plateCase, source)
}

function parseText(text: string, file: string): Source {
  const whole = (code: string, message: string) =>
    new CaseError(file, [{ code, path: [], field: '', message, line: 0, column: 0 }])
  const bytes = new TextEncoder().encode(text).length
  if (bytes > MOST_BYTES) throw whole('too-large', `expected at most 128 kB, got ${Math.ceil(bytes / 1024)} kB`)
  // oxlint-disable-next-line no-control-regex -- a control character is what a binary file gives away
  if (/[\u0000-\u0008\u000e-\u001f\ufffd]/.test(text)) throw whole('binary', 'expected text (YAML or JSON, UTF-8), got a binary file')
  if (isTooDeep(text)) throw whole('too-deep', `expected at most ${MOST_LEVELS} levels of lists and maps, got more`)
  const lines = new LineCounter()
  const document = parseDocument(text, { lineCounter: lines, version: '1.2', prettyErrors: false, logLevel: 'error' })
  const place = (offset: number) => {
    const { line, col } = lines.linePos(offset)
    return { line: Math.max(1, line), column: Math.max(1, col) }
  }
  if (document.errors.length > 0) {
    throw new CaseError(
      file,
      document.errors.map(({ code, message, pos }) => ({
        code: 'yaml',
        path: [],
        field: '',
        message: YAML_PROBLEMS[code] ?? `expected YAML 1.2 or JSON, got: ${message.split('\n')[0].slice(0, 120)}`,
        ...place(pos[0])
      }))
    )
  }
  try {
    const raw: unknown = document.toJS({ maxAliasCount: MOST_ALIASES })
    return { file, raw, locate: (path, atKey = false) => place((atKey ? keyOffsetOf(document, path) : null) ?? offsetOf(document, path)) }
  } catch (error) {
    if (error instanceof ReferenceError) {
      const unresolved = /^Unresolved alias.*: (.+)$/.exec(error.message)
      throw whole('aliases', unresolved ? `expected an anchor &${unresolved[1]} before its alias, got none` : `expected at most ${MOST_ALIASES} uses of aliases, got more`)
    }
    throw error
  }
}

/** More open brackets than levels allowed, or a line that opens more block lists; deeper indentation takes more text than is allowed. */
function isTooDeep(text: string): boolean {
  let open = 0
  for (const [bracket] of text.matchAll(/[[\]{}]/g)) {
    open = bracket === '[' || bracket === '{' ? open + 1 : Math.max(0, open - 1)
    if (open > MOST_LEVELS) return true
  }
  return new RegExp(`^[ \\t]*(?:[-?:][ \\t]+){${MOST_LEVELS}}`, 'm').test(text)
}

const YAML_PROBLEMS: Record<string, string> = {
  DUPLICATE_KEY: 'expected each key once, got it twice',
  MULTIPLE_DOCS: 'expected one case a file, got a second document ("---")',
  TAB_AS_INDENT: 'expected spaces for indentation, got a tab'
}

/** Where a field begins in the text: the node at its path, or the nearest one around it. */
function offsetOf(document: Document, path: FieldPath): number {
  for (let length = path.length; length > 0; length--) {
    const node = document.getIn(path.slice(0, length), true)
    const range = typeof node === 'object' && node !== null && 'range' in node ? (node.range as [number] | null) : null
    if (range) return range[0]
  }
  return 0
}

/** Where the key of a field begins, null where the field is no key of a map. */
function keyOffsetOf(document: Document, path: FieldPath): number | null {
  const parent: unknown = path.length > 1 ? document.getIn(path.slice(0, -1), true) : document.contents
  if (!isMap(parent)) return null
  const pair = parent.items.find(({ key }) => isScalar(key) && String(key.value) === path[path.length - 1])
  return isScalar(pair?.key) ? (pair.key.range?.[0] ?? null) : null
}

/** What would be right, for the issues whose schema does not say it itself. */
function describeIssue(issue: z.core.$ZodRawIssue): string {
  if (issue.code === 'unrecognized_keys') return keysOfSchema(issue.inst).join(', ')
  if (issue.code === 'invalid_type' && issue.expected === 'object') {
    const keys = keysOfSchema(issue.inst)
    return keys.length > 0 ? `{ ${keys.join(', ')} }` : 'a group of keys'
  }
  return 'another value'
}

function keysOfSchema(schema: unknown): string[] {
  const def = (schema as { _zod?: { def?: { shape?: object } } } | undefined)?._zod?.def
  return def?.shape ? Object.keys(def.shape).filter((key) => key !== '$schema') : []
}

function findingsOf(issue: z.core.$ZodIssue, raw: unknown): Finding[] {
  const path = issue.path as (string | number)[]
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => {
      const rival = rivalOf(path, key, raw)
      if (rival) return { code: 'mixed', path: [...path, key], message: `expected keys that go together, got ${quote(key)} beside ${quote(rival)}` }
      const allowed = allowedKeys(path, issue.message.split(', '))
      const near = nearestWord(key, allowed)
      const hint = near ? ` (did you mean "${near}"?)` : ''
      return { code: 'unknown-key', path: [...path, key], message: `expected ${listOf(allowed)}, got ${quote(key)}${hint}` }
    })
  }
  const branches = branchesAt(path)
  if (branches && !isRecord(valueAt(raw, path))) {
    return [{ code: 'type', path, message: `expected ${listOf(Object.keys(branches))} in it, got ${show(valueAt(raw, path))}` }]
  }
  return [{ code: issue.code === 'custom' ? 'value' : 'type', path, message: `expected ${inUnits(issue.message, raw)}, got ${show(valueAt(raw, path))}` }]
}

/** The branches of `plate` and `load`, null elsewhere. */
function branchesAt(path: FieldPath): Record<string, z.ZodType> | null {
  if (path.length !== 1) return null
  return path[0] === 'load' ? LOAD_BRANCHES : path[0] === 'plate' ? PLATE_BRANCHES : null
}

/** The key that chose the branch of `plate` or `load` where `key` belongs to another one, else null. */
function rivalOf(path: FieldPath, key: string, raw: unknown): string | null {
  const branches = branchesAt(path)
  const group = valueAt(raw, path)
  if (!branches || !isRecord(group) || !Object.values(branches).some((branch) => keysOfSchema(branch).includes(key))) return null
  return Object.keys(branches).find((name) => Object.hasOwn(group, name)) ?? null
}

/** A misspelt key of `plate` or `load` may have been meant for any of their branches. */
function allowedKeys(path: FieldPath, own: string[]): string[] {
  const branches = branchesAt(path)
  return branches ? [...new Set(Object.values(branches).flatMap(keysOfSchema))] : own
}

function listOf(words: readonly string[]): string {
  return words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} or ${words[words.length - 1]}`
}

function inUnits(message: string, raw: unknown): string {
  const units = isRecord(raw) && isRecord(raw.units) ? raw.units : {}
  const unit = (kind: string, otherwise: string) => (typeof units[kind] === 'string' ? units[kind] : otherwise)
  return message
    .replaceAll('{length}', unit('length', 'mm'))
    .replaceAll('{force}', unit('force', 'N'))
    .replaceAll('{stress}', unit('stress', 'MPa'))
}

function valueAt(raw: unknown, path: FieldPath): unknown {
  let at = raw
  for (const key of path) {
    if (typeof at !== 'object' || at === null || !Object.hasOwn(at, key)) return undefined
    at = (at as Record<string | number, unknown>)[key]
  }
  return at
}

/** A value in a sentence. */
function show(value: unknown): string {
  if (value === undefined || value === null) return 'nothing'
  if (Array.isArray(value)) return `a list of ${value.length}`
  if (typeof value === 'object') return `{ ${Object.keys(value).slice(0, 4).map(quoteKey).join(', ')}${Object.keys(value).length > 4 ? ', ...' : ''} }`
  if (typeof value === 'string') return quote(value)
  return String(value)
}

/** The case with its defaults: ids by position, E of 200 GPa in the case's stress unit. */
function completeCase(file: CaseFile): PlateCase {
  const { material, units } = file
  return {
    name: file.name,
    units,
    thickness: file.thickness ?? 0,
    material: { E: material.E ?? DEFAULT_E / STRESS_UNITS[units.stress], nu: material.nu, yield: material.yield ?? null },
    plate: file.plate as PlateCase['plate'],
    holes: file.holes.map((hole, i) => ({ ...hole, id: hole.id ?? `hole-${i + 1}` })) as unknown as PlateCase['holes'],
    notches: file.notches.map((notch, i) => ({ ...notch, id: notch.id ?? `notch-${i + 1}` })),
    load: file.load as PlateCase['load'],
    tolerance: file.tolerance,
    expect: file.expect ?? []
  }
}

/** What no single field shows: a thickness that is missing, ids used twice, radii for the wrong number of steps, no load at all. */
function findInconsistencies(file: CaseFile, plateCase: PlateCase): Finding[] {
  const { plate, holes, notches, load, expect } = plateCase
  const findings: Finding[] = []
  const steps = plate.sections.length - 1
  if (file.thickness === undefined) {
    findings.push({ code: 'missing', path: ['thickness'], message: `expected a length > 0 (${file.units.length}), got nothing: a force or a moment needs a thickness to become a stress` })
  }
  if (plate.fillets.length !== steps) {
    findings.push({ code: 'count', path: ['plate', 'fillets'], message: `expected ${steps} ${steps === 1 ? 'radius' : 'radii'}, one a step between sections, got ${plate.fillets.length}` })
  }
  if (Math.abs(load.axial) < SMALLEST_LOAD && Math.abs(load.moment) < SMALLEST_LOAD) findings.push({ code: 'no-load', path: ['load'], message: 'expected an axial force or a moment other than 0, got none' })
  const seen = new Map<string, string>(shoulderSteps(plateNumbers(plateCase)).map((_, i) => [`shoulder-${i + 1}`, 'a shoulder']))
  const named = [...holes.map(({ id }, i) => ({ id, list: 'holes', i })), ...notches.map(({ id }, i) => ({ id, list: 'notches', i }))]
  for (const { id, list, i } of named) {
    const other = seen.get(id)
    if (other) findings.push({ code: 'repeated-id', path: [list, i, 'id'], message: `expected a name of its own, got "${id}", which ${other} has too` })
    seen.set(id, `${list}[${i + 1}]`)
  }
  expect.forEach(({ raiser }, i) => {
    if (raiser === undefined || seen.has(raiser)) return
    const near = nearestWord(raiser, [...seen.keys()])
    const hint = near ? ` (did you mean "${near}"?)` : ''
    findings.push({ code: 'unknown-raiser', path: ['expect', i, 'raiser'], message: `expected the id of a stress raiser, got ${quote(raiser)}${hint}` })
  })
  return findings
}

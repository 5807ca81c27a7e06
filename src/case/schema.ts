// The case file, declared once: types, checks and JSON Schema come from here. Every leaf's error text is what would be right
// there ("a length > 0 ({length})"); read.ts puts it into a sentence with the place, the unit and what was found.

import { z } from 'zod'
import { FORCE_UNITS, LENGTH_UNITS, STRESS_UNITS } from './units.ts'

const keysOf = <T extends object>(record: T) => Object.keys(record) as [keyof T & string, ...(keyof T & string)[]]

/** A number from `least` up (or above it) and up to `most`; the text is what is expected. */
const number = (expected: string, { above, from, below, upTo }: { above?: number; from?: number; below?: number; upTo?: number }) => {
  let schema = z.number(expected)
  if (above !== undefined) schema = schema.gt(above, { error: expected, abort: true })
  if (from !== undefined) schema = schema.gte(from, expected)
  if (below !== undefined) schema = schema.lt(below, expected)
  const bounded = `${expected}, at most ${LARGEST}`
  return (upTo === undefined ? schema.lte(LARGEST, bounded) : schema.lte(upTo, expected)).gte(-LARGEST, `${expected}, at least -${LARGEST}`)
}
/** Beyond these magnitudes a number is a slip of the pen, and squares of it would overflow. */
const LARGEST = 1e12
const SMALLEST = 1e-12

const length = () => number('a length > 0 ({length})', { above: 0 }).gte(SMALLEST, `a length > 0 ({length}), at least ${SMALLEST}`)
const radius = () => number('a radius >= 0 ({length})', { from: 0 })
const coordinate = (what = 'a coordinate ({length})') => number(what, {})
const point = () => z.tuple([coordinate(), coordinate()], 'a point [x, y] ({length})')
const angle = () => number('an angle in degrees', { from: -3600, upTo: 3600 })
const stress = () => number('a stress ({stress})', {})
const text = (expected: string) => z.string(expected).min(1, expected).max(200, expected)
const id = () => text('a name of letters, digits, - or _').regex(/^[A-Za-z0-9_][A-Za-z0-9_-]*$/, 'a name of letters, digits, - or _')
const choice = <T extends string>(values: readonly [T, ...T[]]) => z.enum(values, `one of ${values.join(', ')}`)
const path = () => text('SVG path data ("M ... Z")').max(20000, 'SVG path data of at most 20000 characters')

/** 0.001, 1e-3 or "0.1%": a share above 0 and below 1. */
export const shareSchema = z
  .union([z.number(), z.string()], 'a share such as 0.001 or 0.1%')
  .transform((value, context) => {
    const share = readShare(value)
    if (share === null) context.addIssue({ code: 'custom', message: 'a share between 0 and 1, such as 0.001 or 0.1%' })
    return share ?? 0
  })

/** Smallest tolerance that can be asked for: below it rounding, not the mesh, would have to be judged. */
export const LEAST_TOLERANCE = 1e-7
const LEAST_TOLERANCE_TEXT = 'a tolerance of at least 1e-7'

/** The number behind 0.001, "1e-3" or "0.1%"; null where it is not between 0 and 1. */
export function readShare(value: number | string): number | null {
  const match = /^\s*([0-9.]+(?:e[+-]?[0-9]+)?)\s*(%?)\s*$/i.exec(String(value))
  if (!match) return null
  const share = Number(match[1]) / (match[2] ? 100 : 1)
  return share > 0 && share < 1 ? share : null
}

const units = z.strictObject({
  length: choice(keysOf(LENGTH_UNITS)).default('mm'),
  force: choice(keysOf(FORCE_UNITS)).default('N'),
  stress: choice(keysOf(STRESS_UNITS)).default('MPa')
})

const material = z.strictObject({
  E: number('a modulus > 0 ({stress})', { above: 0 }).optional(),
  nu: number('a Poisson ratio, 0 <= nu < 0.5', { from: 0, below: 0.5 }).default(0.3),
  yield: number('a stress > 0 ({stress})', { above: 0 }).optional()
})

const section = z.strictObject({ width: length(), length: length(), offset: coordinate().default(0) })
const end = choice(['square', 'round'])
const sectionsPlate = z.strictObject({
  sections: z.array(section, 'a list of sections').min(1, 'at least one section').max(200, 'at most 200 sections'),
  fillets: z.array(radius(), 'a list of radii, one a step').default([]),
  ends: z.strictObject({ left: end.default('square'), right: end.default('square') }).default({ left: 'square', right: 'square' })
})
const corner = z.union([
  z.tuple([coordinate(), coordinate()]),
  z.tuple([coordinate(), coordinate(), radius()]),
  z.strictObject({ at: point(), radius: radius().optional(), id: id().optional(), edge: id().optional() })
], 'a corner [x, y], [x, y, radius] or { at: [x, y], radius, id, edge }')
const cornersPlate = z.strictObject({ corners: z.array(corner, 'a list of corners').min(3, 'at least three corners') })
const outlinePlate = z.strictObject({ outline: path() })

const place = { id: id().optional(), at: point() }
const turned = { ...place, angle: angle().default(0) }
const pair = () => z.tuple([length(), length()], 'two lengths > 0 ({length})')
const hole = z.discriminatedUnion(
  'shape',
  [
    z.strictObject({ shape: z.literal('circle'), ...place, diameter: length() }),
    z.strictObject({ shape: z.literal('ellipse'), ...turned, axes: pair() }),
    z.strictObject({ shape: z.literal('slot'), ...turned, length: length(), width: length() }),
    z.strictObject({ shape: z.literal('rectangle'), ...turned, size: pair(), corner: radius() }),
    z.strictObject({ shape: z.literal('outline'), ...turned, path: path() })
  ],
  'one of circle, ellipse, slot, rectangle, outline'
)

const notch = z.strictObject({
  id: id().optional(),
  side: choice(['top', 'bottom', 'both']),
  x: coordinate(),
  depth: length(),
  radius: length(),
  angle: number('an included angle in degrees, 0 <= angle < 180', { from: 0, below: 180 }).default(0)
})

const force = () => number('a force ({force})', {})
const pin = z.strictObject({ hole: id(), force: force(), angle: angle().default(0) })
const held = choice(['left', 'right'])
const endLoad = z.strictObject({ axial: force().default(0), moment: number('a moment ({force} {length})', {}).default(0) })
const pinLoad = z.strictObject({ pin, hold: held })
const pinsLoad = z.strictObject({ pins: z.array(pin, 'a list of pins').min(1, 'at least one pin'), hold: held.optional() })
const edgesLoad = z.strictObject({
  edges: z.array(z.strictObject({ edge: id(), normal: stress().default(0), shear: stress().default(0) }), 'a list of loaded edges').min(1, 'at least one edge'),
  supports: z.array(z.strictObject({ edge: id(), fix: choice(['x', 'y', 'xy']) }), 'a list of supports').optional()
})
const remoteLoad = z.strictObject({ remote: z.strictObject({ xx: stress().default(0), yy: stress().default(0), xy: stress().default(0) }) })

const nominal = z.union([
  z.strictObject({ stress: stress() }),
  z.strictObject({ section: z.tuple([point(), point()], 'two points [[x1, y1], [x2, y2]]') })
], '{ stress } or { section: [[x1, y1], [x2, y2]] }')

const positive = () => number('a number > 0', { above: 0 })
const expectation = z
  .strictObject({
    raiser: id().optional(),
    kt: positive().optional(),
    gross: positive().optional(),
    peak: number('a stress ({stress})', {}).optional(),
    at: point().optional(),
    stress: choice(['xx', 'yy', 'xy', 's1', 's2', 'vonMises']).optional(),
    value: stress().optional(),
    within: shareSchema,
    source: text('the published source of the value'),
    from: choice(['page', 'memory', 'practice', 'computed'])
  })
  .superRefine((row, context) => {
    const wanted = [row.kt, row.gross, row.peak, row.value].filter((value) => value !== undefined).length
    const say = (message: string) => context.addIssue({ code: 'custom', message })
    if (wanted !== 1) say('exactly one of kt, gross, peak or value')
    else if (row.value !== undefined && (row.at === undefined || row.stress === undefined)) say('at: [x, y] and stress beside value')
    else if (row.value === undefined && row.raiser === undefined) say('raiser: the id of the stress raiser that is meant')
  })

const plate = z.union([sectionsPlate, cornersPlate, outlinePlate])
const load = z.union([endLoad, pinLoad, pinsLoad, edgesLoad, remoteLoad])

const base = z.strictObject({
  $schema: z.string('a text').optional(),
  name: text('a name of 1 to 200 characters'),
  units: units.default({ length: 'mm', force: 'N', stress: 'MPa' }),
  thickness: length().optional(),
  material: material.default({ nu: 0.3 }),
  holes: z.array(hole, 'a list of holes').max(2000, 'at most 2000 holes').default([]),
  notches: z.array(notch, 'a list of notches').max(2000, 'at most 2000 notches').default([]),
  nominal: nominal.optional(),
  tolerance: shareSchema.refine((share) => share >= LEAST_TOLERANCE, LEAST_TOLERANCE_TEXT).default(0.001),
  expect: z.array(expectation, 'a list of expectations').optional()
})

const caseSchema = base.extend({ plate, load })

/** A case file as its schema lets it through, whatever this version can solve of it. */
export type CaseFile = z.output<typeof caseSchema>
export type Expectation = z.output<typeof expectation>

/** Keys that choose a branch of `plate` and `load`, the first that is there, so that what is wrong is said of the branch that was meant. */
export const PLATE_BRANCHES = { sections: sectionsPlate, corners: cornersPlate, outline: outlinePlate } as const
export const LOAD_BRANCHES = { axial: endLoad, moment: endLoad, pin: pinLoad, pins: pinsLoad, edges: edgesLoad, remote: remoteLoad, hold: pinLoad, supports: edgesLoad } as const

/** The schema for a raw case, with the branches of `plate` and `load` that its keys choose (sections and end load where none does). */
export function schemaFor(raw: unknown): z.ZodType<CaseFile> {
  const part = (key: string): unknown => (isRecord(raw) ? raw[key] : undefined)
  return base.extend({
    plate: branchOf(PLATE_BRANCHES, part('plate')) ?? sectionsPlate,
    load: branchOf(LOAD_BRANCHES, part('load')) ?? endLoad
  }) as unknown as z.ZodType<CaseFile>
}

function branchOf<T extends Record<string, z.ZodType>>(branches: T, raw: unknown): T[keyof T] | null {
  if (!isRecord(raw)) return null
  const key = Object.keys(branches).find((name) => Object.hasOwn(raw, name))
  return key === undefined ? null : branches[key as keyof T]
}

export function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value)
}

/** What this version solves: bars of sections with square ends, circular holes, notches, end loads. Ids are all given. */
export interface PlateCase {
  readonly name: string
  readonly units: CaseFile['units']
  /** In the length unit. */
  readonly thickness: number
  /** E and yield in the stress unit; yield null where it is not given. */
  readonly material: { readonly E: number; readonly nu: number; readonly yield: number | null }
  readonly plate: z.output<typeof sectionsPlate>
  readonly holes: readonly (Extract<z.output<typeof hole>, { shape: 'circle' }> & { readonly id: string })[]
  readonly notches: readonly (z.output<typeof notch> & { readonly id: string })[]
  readonly load: z.output<typeof endLoad>
  readonly tolerance: number
  readonly expect: readonly Expectation[]
}

/** JSON Schema (draft 2020-12) of the case file, for editors. */
export function caseJsonSchema(): object {
  return z.toJSONSchema(caseSchema, { io: 'input', unrepresentable: 'any' })
}

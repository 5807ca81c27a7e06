// Where the parts of a case stand in its file, kept beside the case so that problems found in its geometry can say so.

import { quoteKey, type FieldPath, type Problem } from './problem.ts'

export interface Source {
  readonly file: string
  /** The case as it was written, before defaults. */
  readonly raw: unknown
  /** Line and column, from 1, of a field (of its key, if asked), or of the nearest part around it that is written in the file. */
  readonly locate: (path: FieldPath, atKey?: boolean) => { line: number; column: number }
}

/** What the finders of problems say; the source adds field and place. */
export type Finding = Pick<Problem, 'code' | 'path' | 'message'>

const sources = new WeakMap<object, Source>()

/** Keeps the source of a case that was read from text. */
export function rememberSource<T extends object>(plateCase: T, source: Source): T {
  sources.set(plateCase, source)
  return plateCase
}

const NO_SOURCE: Source = { file: 'case', raw: null, locate: () => ({ line: 0, column: 0 }) }

/** The source of a case; a case that a program made by itself has none, and its problems have no line. */
export function sourceOf(plateCase: object): Source {
  return sources.get(plateCase) ?? NO_SOURCE
}

/** Problems in file order, with fields and places. */
export function placeFindings(findings: readonly Finding[], source: Source): Problem[] {
  return findings
    .map((finding) => ({ ...finding, field: fieldName(finding.path, source.raw), ...source.locate(finding.path, finding.code === 'unknown-key' || finding.code === 'mixed') }))
    .toSorted((a, b) => a.line - b.line || a.column - b.column)
}

/** A path as a reader counts: `holes[2].diameter`, or `holes relief.diameter` where the hole has an id. */
export function fieldName(path: FieldPath, raw: unknown): string {
  let name = ''
  let at: unknown = raw
  for (const key of path) {
    at = typeof at === 'object' && at !== null ? (at as Record<string | number, unknown>)[key] : undefined
    if (typeof key === 'number') {
      const id = typeof at === 'object' && at !== null && 'id' in at ? at.id : undefined
      // an id that is none (spaces, line breaks) would make the field unreadable
      name += typeof id === 'string' && /^[\w-]{1,200}$/.test(id) ? ` ${id}` : `[${key + 1}]`
    } else name += name ? `.${quoteKey(key)}` : quoteKey(key)
  }
  return name
}

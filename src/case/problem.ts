// What is wrong with a case: a list of problems, each with the field, its place in the file, and what would be right.

/** Where in the case: keys and list positions (from 0), e.g. ['holes', 1, 'diameter']. */
export type FieldPath = readonly (string | number)[]

export interface Problem {
  /** Stable name of the kind of problem, for programs: 'type', 'unknown-key', 'overlap', ... */
  readonly code: string
  readonly path: FieldPath
  /** The path as a reader counts: lists from 1, what has an id called by it; '' for the file itself. */
  readonly field: string
  /** "expected WHAT (UNIT), got VALUE", and the remedy where there is exactly one. */
  readonly message: string
  /** Counted from 1; 0 for the file itself. */
  readonly line: number
  readonly column: number
}

/** A case that is refused, with all its problems in file order. */
export class CaseError extends Error {
  override name = 'CaseError'
  constructor(
    readonly file: string,
    readonly problems: readonly Problem[]
  ) {
    super(problems.map(({ field, message }) => (field ? `${field}: ${message}` : message)).join('; '))
  }
}

/** Problems that are written out; a file with more of them has one cause. */
const MOST_SHOWN = 50

/** The problems as text: one on a line of its own, several under a heading, in columns. */
export function formatProblems({ file, problems }: CaseError): string {
  const place = ({ line, column }: Problem) => (line > 0 ? `${line}:${column}` : '')
  const sentence = ({ field, message }: Problem) => (field ? `${field}: ${message}` : message)
  if (problems.length === 1) {
    const [only] = problems
    return `${[file, place(only)].filter(Boolean).join(':')}${only.field ? ' ' : ': '}${sentence(only)}`
  }
  const shown = problems.slice(0, MOST_SHOWN)
  const width = Math.max(...shown.map((problem) => place(problem).length))
  const rest = problems.length > shown.length ? [`  and ${problems.length - shown.length} more`] : []
  return [`${file}: ${problems.length} problems`, ...shown.map((problem) => `  ${place(problem).padEnd(width)}  ${sentence(problem)}`), ...rest].join('\n')
}

/** Words from the file in quotation marks, cut to 40 letters and kept on one line. */
export function quote(words: string): string {
  return JSON.stringify(words.length > 40 ? `${words.slice(0, 37)}...` : words)
}

/** A key as it is, in quotation marks where it is not one word. */
export function quoteKey(key: string): string {
  return /^[\w$-]{1,40}$/.test(key) ? key : quote(key)
}

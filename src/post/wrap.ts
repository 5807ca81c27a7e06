// Prose broken into lines of a terminal's width.

/** Width of everything that is printed. */
export const COLUMNS = 80

/** A space at which no line is broken; it is printed as a plain one. */
export const GLUE = '\u00a0'

/**
 * Breaks `text` at spaces into lines of at most 80 columns; the first line begins with `first`, the others with `hang`.
 * A word longer than a line keeps a line of its own. No text gives no line.
 */
export function wrap(text: string, hang = '', first = ''): string[] {
  if (text === '') return []
  const lines: string[] = []
  let line = first
  let isEmpty = true
  for (const word of text.split(' ')) {
    if (!isEmpty && line.length + 1 + word.length > COLUMNS) {
      lines.push(line)
      line = hang
      isEmpty = true
    }
    line += isEmpty ? word : ` ${word}`
    isEmpty = false
  }
  return [...lines, line].map((whole) => whole.replaceAll(GLUE, ' '))
}

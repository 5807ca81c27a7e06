// The word that was probably meant.

/** Longer words are compared by their beginning. */
const MOST_LETTERS = 60

/**
 * The nearest of `words` by edit distance (V.I. Levenshtein, 1966), null where none is near: a third of the letters at most, one
 * letter of two, and a single letter only in its other case.
 */
export function nearestWord(word: string, words: readonly string[]): string | null {
  const letters = word.toLowerCase().slice(0, MOST_LETTERS)
  let best: string | null = null
  let least = (letters.length < 2 ? 0 : Math.max(1, Math.floor(letters.length / 3))) + 1
  for (const candidate of words) {
    const distance = editDistance(letters, candidate.toLowerCase().slice(0, MOST_LETTERS))
    if (distance < least) [best, least] = [candidate, distance]
  }
  return best
}

/** Insertions, deletions, replacements and swaps of neighbours between two words. */
function editDistance(a: string, b: string): number {
  const rows = Array.from({ length: a.length + 1 }, (_, i) => Array.from({ length: b.length + 1 }, (__, j) => (i === 0 ? j : j === 0 ? i : 0)))
  for (let i = 1; i <= a.length; i++) {
    for (let j = 1; j <= b.length; j++) {
      const change = a[i - 1] === b[j - 1] ? 0 : 1
      rows[i][j] = Math.min(rows[i - 1][j] + 1, rows[i][j - 1] + 1, rows[i - 1][j - 1] + change)
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) rows[i][j] = Math.min(rows[i][j], rows[i - 2][j - 2] + 1)
    }
  }
  return rows[a.length][b.length]
}

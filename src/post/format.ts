// Numbers as they are printed: a value with as many digits as its error bar leaves, and plain numbers in formulas.
// The minus sign is the typographic one.

/** No more significant digits than this, however narrow the bar. */
const MOST_DIGITS = 7

/** A value and its bar, ready to print; `bar` is '' where there is none to show. */
export interface Barred {
  readonly value: string
  readonly bar: string
}

/**
 * The value rounded where its error bar begins, and the bar rounded up so that it still covers what rounding the
 * value took: 3.1133 with 0.0011 gives "3.113" and "0.002".
 */
export function withBar(value: number, error: number): Barred {
  if (!Number.isFinite(error)) return { value: plainNumber(value, 4), bar: 'unknown' }
  const decimals = decimalsFor(value, error)
  const unit = 10 ** -decimals
  const rounded = Math.round(value / unit) * unit
  // a hair below the next whole unit is rounding of the division, not a wider bar
  const units = Math.max(1, Math.ceil((error + Math.abs(value - rounded)) / unit - 1e-9))
  return { value: fixed(value, decimals), bar: fixed(units * unit, decimals) }
}

/** Decimals (negative: whole tens, hundreds) that show one digit of the error bar. */
export function decimalsFor(value: number, error: number): number {
  const finest = MOST_DIGITS - 1 - (value === 0 ? 0 : Math.floor(Math.log10(Math.abs(value))))
  if (!(error > 0)) return finest
  return Math.min(finest, -Math.floor(Math.log10(error) + 1e-12))
}

/** `value` with the given decimals; negative decimals round to whole tens, hundreds. */
export function fixed(value: number, decimals: number): string {
  const text = decimals >= 0
    ? value.toFixed(Math.min(decimals, 20))
    : String(Math.round(value * 10 ** decimals) * 10 ** -decimals)
  return withMinus(text)
}

/** Up to `digits` significant digits, no trailing zeros, no exponent between 1e-6 and 1e15: 24000, 44, 51666.7. */
export function plainNumber(value: number, digits = 6): string {
  return withMinus(String(Number(value.toPrecision(digits))))
}

/** A share as a percentage with `digits` significant digits: 0.0172 -> "1.7 %". */
export function percent(share: number, digits = 2): string {
  return `${plainNumber(100 * share, digits)} %`
}

// no minus before a rounded zero
function withMinus(text: string): string {
  return /^-[0.]*$/.test(text) ? text.slice(1) : text.replace('-', '−')
}

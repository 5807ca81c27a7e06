import { expect } from 'vitest'

/** How far `actual` may be from `expected`, and why. */
export interface Nearness {
  /** Relative to |expected|. */
  readonly rel?: number
  /** Absolute, in the unit of the values. */
  readonly abs?: number
  readonly because: string
}

/** Asserts |actual - expected| <= rel |expected| + abs, both finite. */
export function expectNear(actual: number, expected: number, { rel = 0, abs = 0, because }: Nearness): void {
  const allowed = rel * Math.abs(expected) + abs
  const off = Math.abs(actual - expected)
  expect(off <= allowed, `${actual} is ${off} from ${expected}, allowed ${allowed}: ${because}`).toBe(true)
}

// Every case of the cases folder: the references within their bands, the demonstrations settled.

import { readdirSync, readFileSync } from 'node:fs'
import { join, resolve } from 'node:path'
import { describe, expect, it } from 'vitest'
import { readCase } from '../../src/case/read.ts'
import { checkExpectations } from '../../src/regress.ts'
import { verify } from '../../src/verify.ts'

const CASES = resolve(import.meta.dirname, '../../cases')
const files = readdirSync(CASES, { recursive: true, encoding: 'utf8' }).filter((file) => file.endsWith('.yaml')).sort()

function solve(file: string) {
  const plateCase = readCase(readFileSync(join(CASES, file), 'utf8'), file)
  return { plateCase, verification: verify(plateCase, { file }) }
}

describe('reference cases', () => {
  const references = files.filter((file) => file.startsWith('reference'))

  it('are there', () => expect(references.length).toBeGreaterThanOrEqual(15))

  it.each(references)('%s', (file) => {
    const { plateCase, verification } = solve(file)
    const rows = checkExpectations(verification, plateCase)
    expect(rows.length).toBeGreaterThan(0)
    expect(rows.filter(({ passed }) => !passed)).toEqual([])
  })

  it('are all explained in the folder\'s README', () => {
    const text = readFileSync(join(CASES, 'README.md'), 'utf8')
    // "`strip-hole-01` … `-05`": a row may name the family
    const missing = references
      .map((file) => file.replace(/^reference\/(.*)\.yaml$/, '$1'))
      .filter((name) => !text.includes(name) && !text.includes(name.replace(/-(\d+|bent|pulled)$/, '')))
    expect(missing).toEqual([])
  })
})

describe('demonstration cases', () => {
  const demos = files.filter((file) => !file.startsWith('reference'))

  it.each(demos)('%s settles', (file) => {
    const { verdict } = solve(file).verification
    expect(verdict.settled).toBe(true)
    expect(verdict.raisers.filter(({ kt }) => kt === null)).toEqual([])
  })
})

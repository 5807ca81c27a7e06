import { readFileSync } from 'node:fs'
import { resolve } from 'node:path'
import { describe, expect, it } from 'vitest'
import { readCase } from '../src/case/read.ts'
import { reportText } from '../src/post/report.ts'
import { verify } from '../src/verify.ts'

const root = resolve(import.meta.dirname, '..')
const readme = readFileSync(resolve(root, 'README.md'), 'utf8')

/** The fenced block between two marks of the README. */
function block(mark: string): string {
  const match = new RegExp(`<!-- ${mark} -->\\n\`\`\`[a-z]*\\n([\\s\\S]*?)\`\`\`\\n<!-- /${mark} -->`).exec(readme)
  expect(match, `README has a block ${mark}`).not.toBeNull()
  return match![1]
}

// times and the last digits of rounding checks differ from machine to machine
const steady = (text: string) => text.trimEnd().split('\n').filter((line) => !/^time |^checks /.test(line))

describe('the README', () => {
  it('prints what the demo prints', () => {
    const file = 'cases/lift-link-relief.yaml'
    const { verdict } = verify(readCase(readFileSync(resolve(root, file), 'utf8'), file), { file })
    expect(steady(block('demo'))).toEqual(steady(reportText(verdict, { verbose: false, colour: false })))
  })

  it('shows the demo case as it is', () => {
    expect(block('case')).toBe(readFileSync(resolve(root, 'cases/lift-link-relief.yaml'), 'utf8'))
  })
})

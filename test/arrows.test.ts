import { readdirSync, readFileSync } from 'node:fs'
import { dirname, join, relative, resolve } from 'node:path'
import { describe, expect, it } from 'vitest'

// the way of the data: a folder imports only from folders to its left
const ORDER = ['case', 'mesh', 'solve', 'post', '.']
const SRC = resolve(import.meta.dirname, '../src')

const files = readdirSync(SRC, { recursive: true, encoding: 'utf8' })
  .filter((file) => file.endsWith('.ts') && !file.endsWith('.d.ts'))
  .map((file) => join(SRC, file))

function importsOf(file: string): string[] {
  const text = readFileSync(file, 'utf8')
  return [...text.matchAll(/(?:^|\n)\s*(?:import|export)[^'"\n]*?(?:\{[^}]*\}[^'"\n]*?)?from\s+'([^']+)'/g)].map((match) => match[1])
}

/** The part of the program that a file belongs to: the name of its first folder, or '.' at the top. */
function partOf(file: string): string {
  const [first, ...rest] = relative(SRC, file).split('/')
  return rest.length === 0 ? '.' : first
}

describe('imports', () => {
  it('are found in the files', () => {
    expect(files.length).toBeGreaterThan(20)
    expect(importsOf(join(SRC, 'verify.ts')).length).toBeGreaterThan(5)
  })

  it('go one way: case, mesh, solve, post, and then the top files', () => {
    const wrong = files.flatMap((file) =>
      importsOf(file)
        .filter((target) => target.startsWith('.'))
        .map((target) => [partOf(file), partOf(resolve(dirname(file), target)), `${relative(SRC, file)} imports ${target}`])
        // the version is a fact of the build that every part may name
        .filter(([from, to, line]) => ORDER.indexOf(to) > ORDER.indexOf(from) && !line.endsWith('/version.ts'))
        .map(([, , line]) => line)
    )
    expect(wrong).toEqual([])
  })

  it('of the sparse solver stay in its folder', () => {
    const folder = join(SRC, 'solve/sparse')
    const outside = files
      .filter((file) => file.startsWith(folder))
      .flatMap((file) => importsOf(file).map((target) => resolve(dirname(file), target)))
      .filter((target) => !target.startsWith(folder))
    expect(outside).toEqual([])
  })

  it('of files, processes and clocks are left to the command', () => {
    const allowed = ['cli.ts', 'bench.ts']
    const touching = files
      .filter((file) => !allowed.includes(relative(SRC, file)))
      .filter((file) => importsOf(file).some((target) => /^node:(fs|process|os|child_process|perf_hooks|path)/.test(target)) || /\b(console|process)\./.test(readFileSync(file, 'utf8')))
      .map((file) => relative(SRC, file))
    expect(touching).toEqual([])
  })
})

// The built command as a shell runs it: exit status, streams, files.

import { execFileSync, spawnSync } from 'node:child_process'
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'

const ROOT = resolve(import.meta.dirname, '../..')
const CLI = join(ROOT, 'dist/cli.js')
const DEMO = 'cases/lift-link-relief.yaml'
const folder = mkdtempSync(join(tmpdir(), 'offchart-'))

function offchart(...argv: string[]) {
  const { status, stdout, stderr } = spawnSync(process.execPath, [CLI, ...argv], { cwd: ROOT, encoding: 'utf8' })
  return { status, stdout, stderr }
}

beforeAll(() => {
  if (!existsSync(CLI)) throw new Error('dist/cli.js is missing: run npm run build first (npm ci does it)')
})

afterAll(() => rmSync(folder, { recursive: true, force: true }))

describe('the built command', () => {
  it('verifies the demo case', () => {
    const { status, stdout, stderr } = offchart('verify', DEMO, '--json')
    expect([status, stderr]).toEqual([0, ''])
    expect(JSON.parse(stdout)).toMatchObject({ governing: 'relief', settled: true })
  })

  it('writes a figure in place and leaves nothing else', () => {
    const figure = join(folder, 'figure.png')
    const { status, stderr } = offchart('render', DEMO, '-o', figure)
    expect([status, stderr]).toEqual([0, ''])
    expect(readFileSync(figure).subarray(1, 4).toString()).toBe('PNG')
    expect(readdirSync(folder)).toEqual(['figure.png'])
  })

  it('refuses in words where files and folders are not what they should be', () => {
    const { status, stderr } = offchart('verify', folder)
    expect(status).toBe(2)
    expect(stderr).toBe(`${folder}: this is a folder, expected a file\n`)
    expect(offchart('regress', CLI)).toMatchObject({ status: 2, stderr: `offchart: ${CLI}: not a folder\n` })
    expect(offchart('render', DEMO, '-o', join(folder, 'none/figure.png')).status).toBe(2)
  })

  it('does not choke on a file without end or without text', () => {
    const binary = join(folder, 'binary.yaml')
    writeFileSync(binary, Uint8Array.from({ length: 4096 }, (_, i) => (i * 37) % 256))
    const { status, stderr } = offchart('verify', binary, '/dev/zero')
    expect(status).toBe(2)
    expect(stderr.split('\n').filter((line) => line.startsWith('    at '))).toEqual([])
  })

  it('takes it quietly when its reader stops reading', () => {
    const command = `"${process.execPath}" "${CLI}" schema | head -c 10`
    expect(execFileSync('sh', ['-c', `${command} 2>&1`], { cwd: ROOT, encoding: 'utf8' })).toHaveLength(10)
  })
})

import { describe, expect, it } from 'vitest'
import { main } from '../../src/cli.ts'
import type { Verdict } from '../../src/post/verdict.ts'
import { memoryIo } from '../support/io.ts'
import { expectNear } from '../support/near.ts'

const STRIP = `name: Strip
thickness: 5
plate: { sections: [{ width: 50, length: 250 }] }
holes: [{ id: bore, shape: circle, diameter: 25, at: [125, 0] }]
load: { axial: 20000 }
`
/** Two decimals of the table in R.C.J. Howland, Phil. Trans. R. Soc. A 229 (1930) 49, which is up to 0.6 % low. */
const EXPECT = `expect:
  - { raiser: bore, gross: 4.32, within: 0.7%, source: "R.C.J. Howland (1930)", from: page }
`
const WRONG = STRIP.replace('axial: 20000', 'axail: 20000')

async function run(argv: string[], files: Record<string, string> = { 'strip.yaml': STRIP }, changes = {}) {
  const io = memoryIo(files, changes)
  const status = await main(argv, io)
  return { status, out: io.out.join(''), err: io.err.join(''), files: io.files }
}

describe('verify', () => {
  it('prints a report and returns 0', async () => {
    const { status, out, err } = await run(['verify', 'strip.yaml'])
    expect(status).toBe(0)
    expect(err).toBe('')
    expect(out).toMatch(/> bore +hole +2\.17\d+ ± 0\.\d+/)
    expect(out).toContain('P / (t (W − d)) = 20000 / (5 × 25) = 160 MPa; gross 80 MPa')
    expect(out).toContain('Settled')
    expect(out).not.toContain('\x1b')
  })

  it('--json prints one object, with a bar that holds the true factor', async () => {
    const { status, out } = await run(['verify', 'strip.yaml', '--json'])
    expect(status).toBe(0)
    const verdict = JSON.parse(out) as Verdict
    expect(verdict).toMatchObject({ case: 'Strip', file: 'strip.yaml', settled: true, governing: 'bore' })
    const { kt } = verdict.raisers[0]
    expectNear(kt!.net, 2.1738, { abs: kt!.error + 5e-5, because: 'independent calculation to four decimals, and the bar' })
  })

  it('--json of several cases prints one object a line', async () => {
    const { out } = await run(['verify', 'a.yaml', 'b.yaml', '--json'], { 'a.yaml': STRIP, 'b.yaml': STRIP })
    const lines = out.trimEnd().split('\n')
    expect(lines.map((line) => (JSON.parse(line) as Verdict).file)).toEqual(['a.yaml', 'b.yaml'])
  })

  it('reads a case from standard input', async () => {
    const { status, out } = await run(['verify', '-'], {}, { stdin: STRIP })
    expect(status).toBe(0)
    expect(out).toContain('stdin')
  })

  it('refuses a bad file with its place, still solves the others, and returns 2', async () => {
    const { status, out, err } = await run(['verify', 'wrong.yaml', 'strip.yaml'], { 'wrong.yaml': WRONG, 'strip.yaml': STRIP })
    expect(status).toBe(2)
    expect(err).toMatch(/^wrong\.yaml:5:\d+ load\.axail: expected axial, moment/)
    expect(err).toContain('did you mean "axial"?')
    expect(out).toContain('> bore')
  })

  it('refuses a file that is not there', async () => {
    const { status, err } = await run(['verify', 'none.yaml'])
    expect(status).toBe(2)
    expect(err).toBe('none.yaml: no such file or folder\n')
  })

  it('owes no tolerance at a fixed order, unless it is asked for', async () => {
    expect((await run(['verify', 'strip.yaml', '--order', '1'])).status).toBe(0)
    expect((await run(['verify', 'strip.yaml', '--order', '1', '--tolerance', '0.01%'])).status).toBe(1)
  })

  it('takes a tolerance as a share or in per cent', async () => {
    for (const text of ['0.002', '2e-3', '0.2%']) {
      const { out } = await run(['verify', 'strip.yaml', '--json', '--tolerance', text])
      expect((JSON.parse(out) as Verdict).tolerance).toBe(0.002)
    }
    for (const text of ['0', '-1', '200%', 'fine', '1e999']) {
      const { status, err } = await run(['verify', 'strip.yaml', `--tolerance=${text}`])
      expect([text, status]).toEqual([text, 2])
      expect(err).toContain('Expected a share of at least 1e-7 and below 1')
    }
  })

  it.each(['0', '11', '2.5', 'high'])('refuses order %s', async (order) => {
    const { status, err } = await run(['verify', 'strip.yaml', '--order', order])
    expect(status).toBe(2)
    expect(err).toContain('whole number from 1 to 10')
  })

  it('meshes with the kind of elements that is asked for, and names the kinds otherwise', async () => {
    for (const kind of ['triangle', 'mixed', 'quad']) {
      const { mesh, settled } = JSON.parse((await run(['verify', 'strip.yaml', '--json', '--elements', kind])).out)
      expect(settled).toBe(true)
      expect([mesh.elements, mesh.triangles > 0, mesh.quads > 0]).toEqual([kind, kind !== 'quad', kind !== 'triangle'])
      expect(mesh.smallestAngle).toBeGreaterThan(15)
      expect(mesh.worstShape).toBeGreaterThan(0.2)
      expect(mesh.worstShape).toBeLessThanOrEqual(1)
    }
    const { status, err } = await run(['verify', 'strip.yaml', '--elements', 'hexagon'])
    expect(status).toBe(2)
    expect(err).toContain('triangle, mixed, quad')
  })

  it('sets the other kinds of elements beside the one that was used in --verbose', async () => {
    const { out } = await run(['verify', 'strip.yaml', '--verbose', '--order', '4'])
    for (const words of ['quads along arcs', 'triangles only', 'quads only']) expect(out).toContain(words)
    expect((await run(['verify', 'strip.yaml', '--order', '4'])).out).not.toContain('triangles only')
  })

  it('refines a mesh of order 1 or 2 until its bar holds or the mesh is as large as it may be', async () => {
    const { raisers, mesh } = JSON.parse((await run(['verify', 'strip.yaml', '--json', '--order', '1', '--tolerance', '20%'])).out)
    expect(raisers[0].kt.error).toBeLessThan(0.2 * raisers[0].kt.net)
    expect(raisers[0].history.length).toBeGreaterThan(2)
    expect(mesh.dof).toBeLessThan(200_000)
  })

  it('says in a sentence what it does not do yet', async () => {
    for (const argv of [['verify', 'strip.yaml', '--figure', 'figures'], ['charts']]) {
      const { status, err } = await run(argv)
      expect(status).toBe(2)
      expect(err).toMatch(/^offchart: .*not supported yet/)
    }
  })

  it('colours only a terminal, and not where NO_COLOR is set', async () => {
    const terminal = { stdoutIsTerminal: true }
    expect((await run(['verify', 'strip.yaml'], undefined, terminal)).out).toContain('\x1b[')
    expect((await run(['verify', 'strip.yaml'], undefined, { ...terminal, env: { NO_COLOR: '1' } })).out).not.toContain('\x1b')
  })

  it('shows progress on a terminal only, on the error stream', async () => {
    const { err, out } = await run(['verify', 'strip.yaml'], undefined, { stderrIsTerminal: true })
    expect(err).toContain('solving strip.yaml')
    expect(out).not.toContain('solving')
  })
})

describe('render', () => {
  it('writes a PNG', async () => {
    const { status, files, err } = await run(['render', 'strip.yaml', '-o', 'strip.png'])
    expect([status, err]).toEqual([0, ''])
    expect([...(files.get('strip.png') as Uint8Array).subarray(0, 8)]).toEqual([137, 80, 78, 71, 13, 10, 26, 10])
  })

  it('draws the mesh over the field where that is asked for', async () => {
    const plain = (await run(['render', 'strip.yaml', '-o', 'strip.png'])).files.get('strip.png') as Uint8Array
    const meshed = (await run(['render', 'strip.yaml', '-o', 'strip.png', '--mesh'])).files.get('strip.png') as Uint8Array
    expect(Buffer.from(meshed).equals(Buffer.from(plain))).toBe(false)
  })

  it('refuses another kind of file, and asks for a name', async () => {
    expect((await run(['render', 'strip.yaml', '-o', 'strip.svg'])).err).toContain('ends in .png')
    expect((await run(['render', 'strip.yaml'])).status).toBe(2)
  })
})

describe('regress', () => {
  it('prints a line an expectation and the count at the end', async () => {
    const { status, out } = await run(['regress', 'c'], { 'c/strip.yaml': STRIP + EXPECT, 'c/deep/plain.yaml': STRIP, 'c/notes.txt': 'no case' })
    expect(status).toBe(0)
    const lines = out.trimEnd().split('\n')
    expect(lines).toHaveLength(2)
    expect(lines[0]).toMatch(/^pass {2}c\/strip\.yaml {2}bore Kt gross {2}4\.34\d+ ± 0\.\d+, expected 4\.32 within 0\.7 % \(\+0\.6\d %, page\)$/)
    expect(lines[1]).toBe('1 passed, 0 failed')
  })

  it('fails outside the band', async () => {
    const { status, out } = await run(['regress', 'c'], { 'c/strip.yaml': STRIP + EXPECT.replace('0.7%', '0.5%') })
    expect(status).toBe(1)
    expect(out).toMatch(/^FAIL .*: outside the band\n0 passed, 1 failed\n$/)
  })

  it('counts a refused file as failed, and 2 wins', async () => {
    const { status, out, err } = await run(['regress', 'c'], { 'c/bad.yaml': WRONG, 'c/strip.yaml': STRIP + EXPECT })
    expect(status).toBe(2)
    expect(out).toMatch(/1 passed, 1 failed\n$/)
    expect(err).toContain('c/bad.yaml')
  })

  it('checks a stress at a point', async () => {
    // far from the hole the strip is under P/(t W) = 80
    const text = STRIP + 'expect: [{ at: [20, 5], stress: xx, value: 80, within: 0.5%, source: "uniform tension", from: memory }]\n'
    const { status, out } = await run(['regress', 'c'], { 'c/strip.yaml': text })
    expect(out).toMatch(/^pass .*xx at 20, 5 {2}/)
    expect(status).toBe(0)
  })

  it('refuses a folder without cases', async () => {
    const { status, err } = await run(['regress', 'empty'])
    expect(status).toBe(2)
    expect(err).toContain('no case file')
  })
})

describe('the program', () => {
  it('prints the JSON Schema of the case file', async () => {
    const { status, out } = await run(['schema'])
    expect(status).toBe(0)
    expect(JSON.parse(out)).toMatchObject({ type: 'object', properties: { plate: expect.anything(), load: expect.anything() } })
  })

  it('proposes the command or option that was meant, and returns 2', async () => {
    const command = await run(['verfy', 'strip.yaml'])
    expect(command.status).toBe(2)
    expect(command.err).toContain('(Did you mean verify?)')
    const option = await run(['verify', 'strip.yaml', '--tolerence', '1%'])
    expect(option.status).toBe(2)
    expect(option.err).toContain('(Did you mean --tolerance?)')
  })

  it('shows its help with the cautions, and its version', async () => {
    const help = await run(['--help'])
    expect(help.status).toBe(0)
    expect(help.out).toContain('licensed\nengineer\'s judgement')
    expect(help.out.split('\n').filter((line) => line.length > 80)).toEqual([])
    expect((await run(['--version'])).out).toMatch(/^\d+\.\d+\.\d+\n$/)
  })

  it('returns 2 without a command', async () => {
    expect((await run([])).status).toBe(2)
  })
})

#!/usr/bin/env node
// The commands: they parse arguments, read and write files and print; what is printed is computed elsewhere.
// Exit status: 0 done as asked; 1 ran but fell short of a tolerance or an expectation; 2 input refused.

import { closeSync, openSync, readdirSync, readSync, realpathSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { basename, dirname, extname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { Command, CommanderError, InvalidArgumentError, Option } from 'commander'
import { CaseError, formatProblems } from './case/problem.ts'
import { readCase } from './case/read.ts'
import { caseJsonSchema, LEAST_TOLERANCE, readShare, type PlateCase } from './case/schema.ts'
import { ELEMENT_KINDS, type ElementKind } from './mesh/mesh.ts'
import { renderFigure } from './post/draw/figure.ts'
import { percent, plainNumber, withBar } from './post/format.ts'
import { CAUTIONS, reportText } from './post/report.ts'
import type { Verdict } from './post/verdict.ts'
import { wrap } from './post/wrap.ts'
import { checkExpectations, type Row } from './regress.ts'
import { verify, type Verification } from './verify.ts'
import { VERSION } from './version.ts'

/** Everything outside the program that a command touches. */
export interface Io {
  stdout(text: string): void
  stderr(text: string): void
  readonly stdoutIsTerminal: boolean
  readonly stderrIsTerminal: boolean
  readonly env: Readonly<Record<string, string | undefined>>
  /** The file's bytes, at most `limit` of them. @throws Error of the file system */
  readFile(path: string, limit: number): Uint8Array
  readStdin(limit: number): Promise<Uint8Array>
  /** Puts a whole file in place, or leaves what was there. @throws Error of the file system */
  writeFile(path: string, bytes: Uint8Array): void
  /** Paths of all files under a folder, at any depth. @throws Error of the file system */
  listFiles(folder: string): string[]
  /** Milliseconds. */
  now(): number
}

type Status = 0 | 1 | 2

/** Bytes of a file that are read: more than a case file may have, so that the reader can say how much is too much. */
const READ_LIMIT = 256 * 1024

/** A reason for which a command can't be done, in one sentence; nothing was computed wrong. */
class Refusal extends Error {}

/** Runs one command line (without the program's name) and returns the exit status. */
export async function main(argv: readonly string[], io: Io): Promise<number> {
  let status: Status = 0
  const program = new Command('offchart')
    .description('How large is the stress at this hole, notch or shoulder of a flat plate, and how sure is that?')
    .version(VERSION)
    .exitOverride()
    .configureOutput({ writeOut: io.stdout, writeErr: io.stderr, getOutHelpWidth: () => 80, getErrHelpWidth: () => 80 })
    .addHelpText('after', `\n${wrap(CAUTIONS).join('\n')}`)

  program
    .command('verify')
    .description('Kt of every stress raiser with its error bar, and which one governs')
    .argument('<case...>', 'case files; - reads one from stdin')
    .option('--json', 'one JSON object a case instead of the report')
    .option('--tolerance <share>', 'half-width wanted on every peak, such as 0.001 or 0.1%', parseTolerance)
    .option('--verbose', 'add how each Kt settled, and the same case with the other kinds of elements')
    .option('--order <p>', 'a fixed order of the elements instead of the accuracy loop', parseOrder)
    .addOption(
      new Option('--elements <kind>', 'triangles, quads along arcs (the usual), or quads only').choices(ELEMENT_KINDS)
    )
    .addOption(new Option('--figure <folder>', 'write the picture of each case').hideHelp())
    .action(async (files: string[], options: VerifyFlags) => {
      status = await verifyCases(files, options, io)
    })

  program
    .command('render')
    .description('the stress picture of a case, for a report')
    .argument('<case>', 'a case file; - reads it from stdin')
    .requiredOption('-o, --output <figure.png>', 'the file to write')
    .option('--mesh', 'draw the sides of the elements over the field')
    .action(async (file: string, { output, mesh }: { output: string; mesh?: true }) => {
      status = await renderCase(file, output, mesh ?? false, io)
    })

  program
    .command('regress')
    .description('every case under a folder against what it expects')
    .argument('[folder]', 'folder of case files', 'cases')
    .action(async (folder: string) => {
      status = await regressFolder(folder, io)
    })

  program
    .command('charts', { hidden: true })
    .argument('[id]')
    .action(() => {
      throw new Refusal('the published charts are not supported yet')
    })

  program
    .command('schema')
    .description('the JSON Schema of the case file')
    .action(() => {
      io.stdout(`${JSON.stringify(caseJsonSchema(), null, 2)}\n`)
    })

  try {
    await program.parseAsync(argv, { from: 'user' })
  } catch (error) {
    // commander has printed its own message already; it calls misuse 1
    if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : 2
    if (!(error instanceof Refusal)) throw error
    io.stderr(`offchart: ${error.message}\n`)
    return 2
  }
  return status
}

interface VerifyFlags {
  readonly json?: true
  readonly tolerance?: number
  readonly verbose?: true
  readonly order?: number
  readonly elements?: ElementKind
  readonly figure?: string
}

async function verifyCases(files: readonly string[], flags: VerifyFlags, io: Io): Promise<Status> {
  if (flags.figure !== undefined) throw new Refusal('--figure is not supported yet: offchart render CASE -o FIGURE.png draws one case')
  const { tolerance, order, elements, verbose = false } = flags
  let worst: Status = 0
  let printed = 0
  for (const file of files) {
    const solved = await solveCase(file, { tolerance, order, elements }, io)
    if (!solved) {
      worst = 2
      continue
    }
    const { verdict } = solved.verification
    const others = verbose && !flags.json ? otherElements(solved, { tolerance, order }, io) : []
    if (flags.json) io.stdout(`${JSON.stringify(verdict, null, files.length > 1 ? 0 : 2)}\n`)
    else io.stdout((printed > 0 ? '\n\n' : '') + reportText(verdict, { verbose, colour: hasColour(io), others }))
    printed++
    // a fixed order promises no tolerance, unless one is asked for
    const isOwed = order === undefined || tolerance !== undefined
    if (!verdict.settled && isOwed) worst = Math.max(worst, 1) as Status
  }
  return worst
}

/** The same case with the kinds of elements that it was not solved with. */
function otherElements({ plateCase, verification }: Solved, flags: SolveFlags, io: Io): Verdict[] {
  const { file, mesh } = verification.verdict
  return ELEMENT_KINDS.filter((kind) => kind !== mesh.elements).map(
    (elements) => verify(plateCase, { file, ...flags, elements, clock: io.now }).verdict
  )
}

async function renderCase(file: string, output: string, mesh: boolean, io: Io): Promise<Status> {
  if (extname(output).toLowerCase() !== '.png') throw new Refusal(`expected a file name that ends in .png, got ${output}`)
  const solved = await solveCase(file, {}, io)
  if (!solved) return 2
  const { verification, plateCase } = solved
  const png = renderFigure(verification, plateCase, { mesh })
  try {
    io.writeFile(output, png)
  } catch (error) {
    throw new Refusal(`${output}: ${fileTrouble(error)}`)
  }
  if (verification.verdict.settled) return 0
  io.stderr(`${file}: drawn, but not settled to the tolerance of ${percent(verification.verdict.tolerance)}\n`)
  return 1
}

async function regressFolder(folder: string, io: Io): Promise<Status> {
  let files: string[]
  try {
    files = io.listFiles(folder).filter((path) => /\.(ya?ml|json)$/i.test(path)).sort()
  } catch (error) {
    throw new Refusal(`${folder}: ${fileTrouble(error)}`)
  }
  if (files.length === 0) throw new Refusal(`${folder}: no case file (.yaml, .yml or .json) in this folder`)
  let passed = 0
  let failed = 0
  let isRefused = false
  for (const file of files) {
    const solved = await solveCase(file, {}, io, (plateCase) => plateCase.expect.length > 0)
    if (solved === 'unwanted') continue
    if (!solved) {
      isRefused = true
      failed++
      io.stdout(`FAIL  ${file}: refused\n`)
      continue
    }
    for (const row of checkExpectations(solved.verification, solved.plateCase)) {
      if (row.passed) passed++
      else failed++
      io.stdout(`${rowLine(file, row)}\n`)
    }
  }
  if (passed + failed === 0) throw new Refusal(`${folder}: no case in this folder has an expect`)
  io.stdout(`${passed} passed, ${failed} failed\n`)
  return isRefused ? 2 : failed > 0 ? 1 : 0
}

/** "pass  cases/reference/strip.yaml  bore Kt net  2.1738 ± 0.0002, expected 2.1738 within 0.1 % (+0.00 %, computed)". */
function rowLine(file: string, { what, expected, within, found, error, passed, why, from }: Row): string {
  const head = `${passed ? 'pass' : 'FAIL'}  ${file}  ${what}`
  const wanted = `expected ${plainNumber(expected, 7)} within ${percent(within, 3)}`
  if (found === null || error === null) return `${head}  ${wanted} (${from}): ${why}`
  const { value, bar } = withBar(found, error)
  const off = 100 * (found / expected - 1)
  const difference = `${off < 0 ? '−' : '+'}${Math.abs(off).toFixed(2)} %`
  return `${head}  ${value} ± ${bar}, ${wanted} (${difference}, ${from})${why ? `: ${why}` : ''}`
}

interface Solved {
  readonly plateCase: PlateCase
  readonly verification: Verification
}

type SolveFlags = { readonly tolerance?: number; readonly order?: number; readonly elements?: ElementKind }

/** Reads and solves a case; null when it was refused, which has then been said on stderr. */
async function solveCase(file: string, flags: SolveFlags, io: Io): Promise<Solved | null>
async function solveCase(
  file: string,
  flags: SolveFlags,
  io: Io,
  isWanted: (plateCase: PlateCase) => boolean
): Promise<Solved | 'unwanted' | null>
async function solveCase(
  file: string,
  flags: SolveFlags,
  io: Io,
  isWanted: (plateCase: PlateCase) => boolean = () => true
): Promise<Solved | 'unwanted' | null> {
  const name = file === '-' ? 'stdin' : file
  let bytes: Uint8Array
  try {
    bytes = file === '-' ? await io.readStdin(READ_LIMIT) : io.readFile(file, READ_LIMIT)
  } catch (error) {
    io.stderr(`${name}: ${fileTrouble(error)}\n`)
    return null
  }
  const showsProgress = io.stderrIsTerminal
  try {
    const plateCase = readCase(new TextDecoder().decode(bytes), name)
    if (!isWanted(plateCase)) return 'unwanted'
    if (showsProgress) io.stderr(`solving ${name} …`)
    return { plateCase, verification: verify(plateCase, { file: name, ...flags, clock: io.now }) }
  } catch (error) {
    if (!(error instanceof CaseError)) throw error
    io.stderr(`${showsProgress ? CLEAR_LINE : ''}${formatProblems(error)}\n`)
    return null
  } finally {
    if (showsProgress) io.stderr(CLEAR_LINE)
  }
}

/** Back to the start of the terminal's line, and the line emptied. */
const CLEAR_LINE = '\r\x1b[K'

function hasColour({ stdoutIsTerminal, env }: Io): boolean {
  return stdoutIsTerminal && !env.NO_COLOR && env.TERM !== 'dumb'
}

function parseTolerance(text: string): number {
  const share = readShare(text)
  if (share === null || share < LEAST_TOLERANCE) throw new InvalidArgumentError(`Expected a share of at least ${LEAST_TOLERANCE} and below 1, such as 0.001 or 0.1%.`)
  return share
}

function parseOrder(text: string): number {
  const order = Number(text)
  if (!Number.isInteger(order) || order < 1 || order > 10) throw new InvalidArgumentError('Expected a whole number from 1 to 10.')
  return order
}

/** What went wrong with a file, in words. */
function fileTrouble(error: unknown): string {
  const code = (error as { code?: string }).code
  switch (code) {
    case 'ENOENT':
      return 'no such file or folder'
    case 'EISDIR':
      return 'this is a folder, expected a file'
    case 'ENOTDIR':
      return 'not a folder'
    case 'EACCES':
    case 'EPERM':
      return 'no permission'
    case undefined:
      throw error
    default:
      return `can't be read or written (${code})`
  }
}

function readUpTo(descriptor: number, limit: number): Uint8Array {
  const buffer = new Uint8Array(limit)
  let length = 0
  while (length < limit) {
    const count = readSync(descriptor, buffer, length, limit - length, null)
    if (count === 0) break
    length += count
  }
  return buffer.subarray(0, length)
}

/** The real files, streams and clock of this process. */
function processIo(): Io {
  return {
    stdout: (text) => void process.stdout.write(text),
    stderr: (text) => void process.stderr.write(text),
    stdoutIsTerminal: process.stdout.isTTY === true,
    stderrIsTerminal: process.stderr.isTTY === true,
    env: process.env,
    readFile(path, limit) {
      const descriptor = openSync(path, 'r')
      try {
        return readUpTo(descriptor, limit)
      } finally {
        closeSync(descriptor)
      }
    },
    async readStdin(limit) {
      const chunks: Buffer[] = []
      let length = 0
      for await (const chunk of process.stdin) {
        chunks.push(chunk as Buffer)
        length += (chunk as Buffer).length
        if (length >= limit) break
      }
      return Buffer.concat(chunks).subarray(0, limit)
    },
    writeFile(path, bytes) {
      const temporary = join(dirname(path), `.${basename(path)}.${process.pid}.tmp`)
      try {
        writeFileSync(temporary, bytes)
        renameSync(temporary, path)
      } catch (error) {
        rmSync(temporary, { force: true })
        throw error
      }
    },
    listFiles(folder) {
      if (!statSync(folder).isDirectory()) throw Object.assign(new Error(), { code: 'ENOTDIR' })
      return readdirSync(folder, { recursive: true, withFileTypes: true })
        .filter((entry) => entry.isFile())
        .map((entry) => join(entry.parentPath, entry.name))
    },
    now: () => performance.now()
  }
}

function isEntry(): boolean {
  try {
    return realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)
  } catch {
    return false
  }
}

if (isEntry()) {
  // a reader that has seen enough (head, less) closes the pipe: no error
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code !== 'EPIPE') throw error
    process.exit()
  })
  process.exitCode = await main(process.argv.slice(2), processIo())
}

// A stand-in for the process around a command: files in memory, output in strings.

import type { Io } from '../../src/cli.ts'

export interface MemoryIo extends Io {
  readonly files: Map<string, string | Uint8Array>
  readonly out: string[]
  readonly err: string[]
}

/** An Io with the given files (by path) and standard input; `changes` overrides the rest. */
export function memoryIo(files: Record<string, string>, changes: Partial<Io> & { stdin?: string } = {}): MemoryIo {
  const stored = new Map<string, string | Uint8Array>(Object.entries(files))
  const out: string[] = []
  const err: string[] = []
  const bytesOf = (content: string | Uint8Array) => (typeof content === 'string' ? new TextEncoder().encode(content) : content)
  return {
    files: stored,
    out,
    err,
    stdout: (text) => void out.push(text),
    stderr: (text) => void err.push(text),
    stdoutIsTerminal: false,
    stderrIsTerminal: false,
    env: {},
    readFile(path, limit) {
      const content = stored.get(path)
      if (content === undefined) throw Object.assign(new Error(path), { code: 'ENOENT' })
      return bytesOf(content).subarray(0, limit)
    },
    readStdin: async (limit) => bytesOf(changes.stdin ?? '').subarray(0, limit),
    writeFile: (path, bytes) => void stored.set(path, bytes),
    listFiles: (folder) => [...stored.keys()].filter((path) => path.startsWith(`${folder}/`)),
    now: () => 0,
    ...changes
  }
}

import type { Io } from '../../../cli/io.ts'

export type MemoryIo = Io & { out: () => string; err: () => string }

/** An Io that keeps what is written. */
export function memoryIo(
  given: Partial<Pick<Io, 'env' | 'stdoutIsTerminal' | 'stderrIsTerminal'>> & { input?: string } = {},
): MemoryIo {
  let out = ''
  let err = ''
  const { input = '', ...rest } = given
  return {
    env: {},
    stdinIsTerminal: false,
    stdoutIsTerminal: false,
    stderrIsTerminal: false,
    ...rest,
    stdin: (async function* () {
      yield new TextEncoder().encode(input)
    })(),
    write: async (text) => {
      out += text
      return true
    },
    say: (line) => {
      err += `${line}\n`
    },
    sayOver: () => undefined,
    now: () => 1_780_000_000_000,
    out: () => out,
    err: () => err,
  }
}

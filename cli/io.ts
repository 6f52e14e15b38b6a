import { writeSync } from 'node:fs'
import { OgeeError } from '../shared/errors.ts'

/** Everything a command touches of the world outside, so that tests can stand in for it. */
export type Io = {
  env: Readonly<Record<string, string | undefined>>
  stdin: AsyncIterable<Uint8Array>
  stdinIsTerminal: boolean
  stdoutIsTerminal: boolean
  stderrIsTerminal: boolean
  /** Writes to standard output and waits for a slow reader. False once the reader has gone: stop producing. */
  write: (text: string) => Promise<boolean>
  /** Writes a line to standard error. */
  say: (line: string) => void
  /** Writes over the last line of standard error that was written so, on a terminal only. Empty text clears it. */
  sayOver: (text: string) => void
  /** Milliseconds since 1970; the one clock. */
  now: () => number
}

/** The Io of this process. */
export function processIo(): Io {
  let readerGone = false
  let failure: OgeeError | undefined
  // A reader such as `head` leaves when it has enough. That is its right and no trouble of ours.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === 'EPIPE') readerGone = true
    else failure = new OgeeError('read-failed', `Standard output failed: ${error.code ?? 'unknown'}.`)
  })
  process.stderr.on('error', () => undefined)
  let over = 0
  // Spaces and carriage returns only: a terminal that knows no escape sequences understands them too.
  const sayOver = (text: string) => {
    if (process.stderr.isTTY !== true || (text === '' && over === 0)) return
    process.stderr.write(`\r${text.padEnd(over)}${text === '' ? '\r' : ''}`)
    over = text.length
  }
  const written = (text: string) =>
    new Promise<void>((resolve) => {
      process.stdout.write(text, () => resolve())
    })
  return {
    env: process.env,
    stdin: process.stdin,
    stdinIsTerminal: process.stdin.isTTY === true,
    stdoutIsTerminal: process.stdout.isTTY === true,
    stderrIsTerminal: process.stderr.isTTY === true,
    write: async (text) => {
      if (!readerGone) await written(text)
      if (failure) throw failure
      return !readerGone
    },
    say: (line) => {
      sayOver('')
      process.stderr.write(`${line}\n`)
    },
    sayOver,
    now: () => Date.now(),
  }
}

/** Last words on standard error when the process ends at once: nothing may wait in a buffer. */
export function sayNow(text: string): void {
  try {
    writeSync(2, text)
  } catch {
    // Nobody can be told any more.
  }
}

/** True when escape sequences are welcome on standard output. */
export function wantsColour(io: Pick<Io, 'env' | 'stdoutIsTerminal'>): boolean {
  return io.stdoutIsTerminal && !io.env.NO_COLOR && io.env.TERM !== 'dumb'
}

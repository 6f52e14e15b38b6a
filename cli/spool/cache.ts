import { createHash } from 'node:crypto'
import fs from 'node:fs'
import { join } from 'node:path'
import type { Endpoint, InputOf, ReplyOf } from '../../shared/contract/endpoint.ts'
import type { Io } from '../io.ts'
import { makeFolder, putDown } from './disk.ts'

/** What a station needs to go on without the server, as it last answered: revisions, lots, instruments, the key. */
const kept: readonly string[] = ['readRevision', 'listLots', 'listInstruments', 'readLedgerKey']

export type AnswerCache = {
  keeps: (endpoint: Endpoint) => boolean
  read: <E extends Endpoint>(endpoint: E, input: InputOf<E>) => { reply: ReplyOf<E>; ageMs: number } | null
  write: <E extends Endpoint>(endpoint: E, input: InputOf<E>, reply: ReplyOf<E>) => void
}

/** The folder of the XDG base directory specification, or its default; relative ones are ignored as it says. */
export function cacheFolder(env: Io['env']): string {
  const { XDG_CACHE_HOME: given, HOME: home = '' } = env
  return `${given?.startsWith('/') ? given : `${home}/.cache`}/ogee`
}

/** Answers of one server, a file each. A file that cannot be written or read costs the way without the server only. */
export function answerCache(io: Pick<Io, 'env' | 'now'>, url: string): AnswerCache {
  const folder = join(cacheFolder(io.env), new URL(url).host.replaceAll(/[^A-Za-z0-9.-]/g, '_'))
  const fileOf = (endpoint: Endpoint, input: unknown) => {
    const name = createHash('sha256')
      .update(JSON.stringify([url, input]))
      .digest('hex')
      .slice(0, 32)
    return join(folder, `${endpoint.id}-${name}.json`)
  }
  /** What this process has read or written: a batch asks the same for each unit. */
  const known = new Map<string, { reply: unknown; atMs: number }>()
  return {
    keeps: (endpoint) => kept.includes(endpoint.id),
    read: (endpoint, input) => {
      const file = fileOf(endpoint, input)
      try {
        const found = known.get(file) ?? readFile(endpoint, file)
        if (found === null) return null
        known.set(file, found)
        return { reply: found.reply as ReplyOf<typeof endpoint>, ageMs: io.now() - found.atMs }
      } catch {
        return null
      }
    },
    write: (endpoint, input, reply) => {
      const file = fileOf(endpoint, input)
      known.set(file, { reply, atMs: io.now() })
      try {
        makeFolder(folder)
        putDown(file, JSON.stringify({ reply }), folder)
      } catch {
        // Recording goes on; without the server this answer will be missing, and that is said then.
      }
    },
  }
}

function readFile(endpoint: Endpoint, file: string): { reply: unknown; atMs: number } | null {
  const { reply } = JSON.parse(fs.readFileSync(file, 'utf8')) as { reply: unknown }
  const isGood = endpoint.reply.schema.safeParse(reply).success
  return isGood ? { reply, atMs: fs.statSync(file).mtimeMs } : null
}

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
  return {
    keeps: (endpoint) => kept.includes(endpoint.id),
    read: (endpoint, input) => {
      const file = fileOf(endpoint, input)
      try {
        const stored = JSON.parse(fs.readFileSync(file, 'utf8')) as { reply: unknown }
        const checked = endpoint.reply.schema.safeParse(stored.reply)
        if (!checked.success) return null
        const ageMs = io.now() - fs.statSync(file).mtimeMs
        return { reply: stored.reply as ReplyOf<typeof endpoint>, ageMs }
      } catch {
        return null
      }
    },
    write: (endpoint, input, reply) => {
      try {
        makeFolder(folder)
        putDown(fileOf(endpoint, input), JSON.stringify({ reply }), folder)
      } catch {
        // Recording goes on; without the server this answer will be missing, and that is said then.
      }
    },
  }
}

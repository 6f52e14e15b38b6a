import type { Endpoint, InputOf, ReplyOf } from '../../shared/contract/endpoint.ts'
import { findUnits } from '../../shared/contract/units.ts'
import { errorTable, isOgeeError, OgeeError } from '../../shared/errors.ts'
import { type Client, makeClient, type Patience } from '../client.ts'
import type { Connection } from '../config.ts'
import type { Io } from '../io.ts'
import { type AnswerCache, answerCache } from './cache.ts'

/** A production line does not wait a minute for a server that is away: what is on disk is as good. */
export const spoolPatience: Patience = { tries: 2, firstWaitMs: 200, waitInAllMs: 3_000, answerMs: 4_000 }

type Call = <E extends Endpoint>(endpoint: E, input: InputOf<E>) => Promise<ReplyOf<E>>
export type SpoolClient = {
  url: string
  cache: AnswerCache
  /** To the server; what it keeps is remembered, and given from memory while the server is away. */
  call: Call
  sendBlock: Client['sendBlock']
  /** From memory alone. */
  offline: { call: Call }
}

/** True for what may be better in a moment: the server away, overloaded, or cut off in the middle. */
export const isOutage = (error: unknown): boolean => isOgeeError(error) && errorTable[error.code].retry

export function spoolClient(connection: Connection, io: Io, patience = spoolPatience): SpoolClient {
  const client = makeClient(connection, io, patience)
  const cache = answerCache(io, connection.url)
  let away: OgeeError | null = null
  const remembered = <E extends Endpoint>(endpoint: E, input: InputOf<E>): ReplyOf<E> => {
    const found = cache.keeps(endpoint) ? cache.read(endpoint, input) : null
    if (found) return found.reply
    throw new OgeeError('server-unreachable', `The server does not answer, and ${missing(endpoint)}.`)
  }
  return {
    url: client.url,
    cache,
    call: async (endpoint, input) => {
      if (away && cache.keeps(endpoint)) return remembered(endpoint, input)
      try {
        const reply = await client.call(endpoint, input)
        away = null
        if (cache.keeps(endpoint)) cache.write(endpoint, input, reply)
        return reply
      } catch (error) {
        if (!isOgeeError(error) || !isOutage(error)) throw error
        away = error
        if (!cache.keeps(endpoint)) throw error
        return remembered(endpoint, input)
      }
    },
    sendBlock: client.sendBlock,
    offline: {
      call: async <E extends Endpoint>(endpoint: E, input: InputOf<E>) => {
        // What the unit has cannot be asked: nothing said counts as neutral, and the server checks that later.
        if (endpoint.id === findUnits.id) return { items: [] } as unknown as ReplyOf<E>
        return remembered(endpoint, input)
      },
    },
  }
}

function missing({ id }: Endpoint): string {
  if (id === 'readRevision') {
    return 'no released revision of the design is kept on this computer. Run one trim with --spool while it answers'
  }
  if (id === 'readRecord') return 'a pass whose effects are learned needs the record before it'
  return 'what is needed is not kept on this computer'
}

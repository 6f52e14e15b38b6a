import type { Endpoint, InputOf, ReplyOf } from '../../contract/endpoint.ts'
import { listCheckpoints, listKeys } from '../../contract/ledger-checkpoints.ts'
import { listEntries, listStrays } from '../../contract/ledger-entries.ts'
import { OgeeError } from '../../errors.ts'
import { limits } from '../../limits.ts'
import type { LedgerSource } from './check-ledger.ts'

/** Entries of a request: some megabytes. */
const entriesAtOnce = 2_000
const lineEnd = 10

/** How a server is asked: by the command line or by the browser. */
export type Asking = {
  call: <E extends Endpoint>(endpoint: E, input: InputOf<E>) => Promise<ReplyOf<E>>
  /** Bytes of all lines of an answer. */
  page: <E extends Endpoint>(endpoint: E, input: InputOf<E>) => Promise<Uint8Array>
}

/**
 * A server's ledger, read over its interface.
 *
 * @param client asks the server, and again where that can help.
 * @returns the source. It throws what the client throws, and `answer-cut` for a page without its last line.
 * Source: contract.md, HTTP.
 * @example checkLedger(serverSource(client), options)
 */
export function serverSource(client: Asking): LedgerSource {
  return {
    keys: async () => (await client.call(listKeys, {})).items,
    checkpoints: () =>
      everyPage((after) =>
        client.call(listCheckpoints, { query: { order: 'oldest', limit: limits.pageMax, ...after } }),
      ),
    entries: async (from) => {
      const bytes = await client.page(listEntries, { query: { from, limit: entriesAtOnce } })
      const last = bytes.lastIndexOf(lineEnd, bytes.length - 2) + 1
      return { lines: linesIn(bytes.subarray(0, last)), ...endOf(bytes.subarray(last)) }
    },
    strays: async () => {
      const found: Awaited<ReturnType<LedgerSource['strays']>>[number][] = []
      for (let after: number | null = 0; after !== null; ) {
        const page: { items: typeof found; next: number | null } = await client.call(listStrays, {
          query: { after },
        })
        found.push(...page.items)
        after = page.next
      }
      return found
    },
  }
}

/** One at a time, so that what is made of a line lives no longer than its turn. */
function* linesIn(bytes: Uint8Array): Generator<Uint8Array> {
  for (let from = 0; from < bytes.length; ) {
    const end = bytes.indexOf(lineEnd, from)
    yield bytes.subarray(from, end)
    from = end + 1
  }
}

/** The last line says that nothing was cut. */
function endOf(line: Uint8Array): { next: number | null; size: number } {
  const text = new TextDecoder().decode(line)
  const { end, next, size } = (text.startsWith('{"end":') ? JSON.parse(text) : {}) as Record<string, unknown>
  if (end === true && (next === null || typeof next === 'number') && typeof size === 'number') {
    return { next, size }
  }
  throw new OgeeError('answer-cut', 'The answer of the server was cut.')
}

async function everyPage<Item>(
  read: (after: { after?: string }) => Promise<{ items: readonly Item[]; next: string | null }>,
): Promise<Item[]> {
  const items: Item[] = []
  for (let after: string | null | undefined; after !== null; ) {
    const page = await read(after === undefined ? {} : { after })
    items.push(...page.items)
    after = page.next
  }
  return items
}

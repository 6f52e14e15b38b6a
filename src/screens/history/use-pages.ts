import { type QueryClient, type QueryState, useQueryClient } from '@tanstack/react-query'
import { useEffect, useLayoutEffect, useRef, useSyncExternalStore } from 'react'
import type { RecordLine } from '../../../shared/contract/record.ts'
import type { Filters } from '../../features/record/filters.ts'
import { type Chain, follow, pageAt, rowsOf } from '../../features/record/page-chain.ts'
import { recordsOptions } from '../../features/record/queries.ts'

/** Rows before the end at which the next page is read. */
const ahead = 40
/** Pages held at most: whoever scrolls through a hundred thousand records keeps a thousand of them. */
const heldPages = 20
/** The newest page is read again at the top of the list when it is older than this, ms. */
const freshMs = 5_000

export type Pages = {
  /** The record in a row; undefined while its page is read. */
  record: (row: number) => RecordLine | undefined
  /** The rows at hand without a gap round this one. */
  atHand: (row: number) => { first: number; end: number }
  isReading: boolean
  error: Error | null
  retry: () => void
}

/**
 * Reads the pages that hold `rows`, and the next one near the end, and follows the chain with what they say. Pages not seen
 * for long are forgotten and read again when they are scrolled to.
 */
export function usePages(
  filters: Filters,
  chain: Chain,
  setChain: (chain: Chain) => void,
  rows: readonly number[],
  isAtTop: boolean,
): Pages {
  const client = useQueryClient()
  const wanted = wantedPages(chain, rows)
  const afters = wanted.map((index) => chain.starts[index]!.after)
  const states = useRead(client, filters, afters)
  const page = (index: number) => {
    const start = chain.starts[index]
    return start && client.getQueryData(recordsOptions(filters, start.after).queryKey)
  }
  useLayoutEffect(() => {
    const next = wanted.reduce((known, index, i) => {
      const read = page(index)
      // Only while the chain still says what was asked.
      return read && known.starts[index]?.after === afters[i] ? follow(known, index, read) : known
    }, chain)
    if (next !== chain) setChain(next)
  })
  useForget(filters, afters)
  useFreshNewest(filters, isAtTop && chain.starts[0]?.after === '')
  return {
    record: (row) => {
      const index = pageAt(chain, row)
      return page(index)?.items[row - chain.starts[index]!.first]
    },
    atHand: (row) => {
      const here = pageAt(chain, row)
      let from = here
      let to = here
      while (from > 0 && page(from - 1)) from -= 1
      while (page(to + 1)) to += 1
      return { first: chain.starts[from]?.first ?? 0, end: chain.starts[to + 1]?.first ?? rowsOf(chain) }
    },
    isReading: states.some((state) => state?.status === 'pending'),
    error: states.find((state) => state?.error)?.error ?? null,
    retry: () => {
      for (const after of afters) void client.prefetchQuery(recordsOptions(filters, after))
    },
  }
}

function wantedPages(chain: Chain, rows: readonly number[]): readonly number[] {
  const last = chain.starts.length - 1
  const pages = new Set(rows.map((row) => pageAt(chain, row)))
  const isNearEnd = chain.end === null && (rows.at(-1) ?? 0) >= rowsOf(chain) - ahead
  if (isNearEnd) pages.add(last)
  return [...pages].sort((a, b) => a - b)
}

/** Reads the pages that start there, and draws again when one of them has come or failed. */
function useRead(client: QueryClient, filters: Filters, afters: readonly string[]) {
  const states = () => afters.map((after) => client.getQueryState(recordsOptions(filters, after).queryKey))
  useSyncExternalStore(
    (listener) => client.getQueryCache().subscribe(listener),
    () => states().map(stamp).join(),
  )
  const latest = useRef({ filters, afters })
  latest.current = { filters, afters }
  // biome-ignore lint/correctness/useExhaustiveDependencies: other pages are wanted, or the same once more, by their names alone
  useEffect(() => {
    for (const after of latest.current.afters) {
      void client.prefetchQuery(recordsOptions(latest.current.filters, after))
    }
  }, [client, afters.join()])
  return states()
}

const stamp = (state: QueryState<unknown> | undefined) =>
  state && `${state.dataUpdatedAt} ${state.errorUpdatedAt} ${state.status}`

/** Keeps the pages wanted last, so many and no more. */
function useForget(filters: Filters, afters: readonly string[]): void {
  const client = useQueryClient()
  const held = useRef(new Set<string>())
  useEffect(() => {
    const seen = held.current
    for (const after of afters) {
      seen.delete(after)
      seen.add(after)
    }
    for (const after of seen) {
      if (seen.size <= Math.max(heldPages, afters.length)) break
      seen.delete(after)
      client.removeQueries({ queryKey: recordsOptions(filters, after).queryKey, exact: true })
    }
  })
}

/** New records come in where one looks for them, at the top, and move no row that is being read further down. */
function useFreshNewest(filters: Filters, isAtTop: boolean): void {
  const client = useQueryClient()
  const latest = useRef(filters)
  latest.current = filters
  useEffect(() => {
    if (isAtTop) void client.prefetchQuery({ ...recordsOptions(latest.current, ''), staleTime: freshMs })
  }, [client, isAtTop])
}

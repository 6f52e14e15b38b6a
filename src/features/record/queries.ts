import { type QueryClient, queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import { useRef } from 'react'
import { countRecords, listRecorders } from '../../../shared/contract/history.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { getTrim, listTrims, postTrim } from '../../../shared/contract/trims.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { api } from '../../lib/api.ts'
import type { Filters } from './filters.ts'

/**
 * One keyset page of records; `after` is where it starts, '' for the newest. An older page changes by a finding at most; the
 * newest moves with every record, and is read again only where that disturbs nobody.
 */
export const recordsOptions = (filters: Filters, after: string) =>
  queryOptions({
    queryKey: ['records', 'list', filters, after],
    queryFn: ({ signal }) =>
      api(listTrims, { query: { ...filters, after: after === '' ? undefined : after } }, signal),
    staleTime: after === '' ? Number.POSITIVE_INFINITY : 60_000,
  })

/** How many match: told beside the list when it has been counted, which the list does not wait for. */
export const countOptions = (filters: Filters) =>
  queryOptions({
    queryKey: ['records', 'count', filters],
    queryFn: ({ signal }) => api(countRecords, { query: filters }, signal),
    staleTime: 30_000,
  })

export const recordersOptions = queryOptions({
  queryKey: ['records', 'recorders'],
  queryFn: ({ signal }) => api(listRecorders, {}, signal),
  staleTime: 60_000,
})

/** A record itself never changes; its notices and its place in the ledger may still come. */
export const recordOptions = (id: string) =>
  queryOptions({
    queryKey: ['records', 'one', id],
    queryFn: ({ signal }) => api(getTrim, { params: { id } }, signal),
    // The place in the ledger follows within a second or so: look again until it is there.
    refetchInterval: ({ state }) => (state.data && state.data.ledger === null ? 2_000 : false),
  })

/** Trims of the record's unit, channel and range, oldest first: as many as one page of the newest holds. */
export const placeTrimsOptions = ({ unit, design, channel, range }: TrimRecord) =>
  queryOptions({
    queryKey: ['records', 'place', design, unit, channel, range],
    queryFn: async ({ signal }) => {
      const query = { unit, design, kind: 'trim', limit: limits.pageMax }
      const { items } = await api(listTrims, { query }, signal)
      return items.filter((line) => line.channel === channel && line.range === range).reverse()
    },
    staleTime: 60_000,
  })

const chainMost = 20

/** The records that this one follows, oldest first. */
export const chainOptions = (client: QueryClient, record: TrimRecord) =>
  queryOptions({
    queryKey: ['records', 'chain', record.id],
    queryFn: async () => {
      const chain: TrimRecord[] = []
      let id = record.follows
      while (id !== null && chain.length < chainMost) {
        const earlier: TrimRecord = await client.fetchQuery({ ...recordOptions(id), staleTime: 60_000 })
        chain.unshift(earlier)
        id = earlier.follows
      }
      return chain
    },
    staleTime: 60_000,
  })

/**
 * An override or a withdrawal of a record. The key stays the same while the same act is tried again, so that a lost
 * answer doubles nothing; another reason is another act.
 */
export function useAmend(record: TrimRecord, kind: 'override' | 'withdraw') {
  const client = useQueryClient()
  const attempt = useRef<{ reason: string; key: string } | null>(null)
  return useMutation({
    mutationFn: (reason: string) => {
      if (attempt.current?.reason !== reason) attempt.current = { reason, key: crypto.randomUUID() }
      const { design, revision, unit, channel, range } = record
      return api(postTrim, {
        body: { kind, design, revision, unit, channel, range, follows: record.id, reason },
        idempotencyKey: attempt.current.key,
      })
    },
    onSuccess: () => client.invalidateQueries({ queryKey: ['records'] }),
    onError: (error) => {
      // Refused for good: a further try is a new act.
      if (!isOgeeError(error, 'server-unreachable') && !isOgeeError(error, 'sign-in-required')) {
        attempt.current = null
      }
    },
  })
}

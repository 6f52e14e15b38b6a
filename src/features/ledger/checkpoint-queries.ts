import { keepPreviousData, queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import { getConsistency } from '../../../shared/contract/ledger.ts'
import { listCheckpoints, listKeys, postKey } from '../../../shared/contract/ledger-checkpoints.ts'
import type { KeyStatement } from '../../../shared/contract/proof.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { consistencyFault } from '../../../shared/ledger/check-consistency-proof.ts'
import { checkNote } from '../../../shared/ledger/check-proof.ts'
import type { LedgerKey } from '../../../shared/ledger/checkpoint.ts'
import { api } from '../../lib/api.ts'
import { withCrypto } from '../../lib/ledger-crypto.ts'

export const checkpointsOptions = (after: string | undefined) =>
  queryOptions({
    queryKey: ['ledger', 'checkpoints', after ?? null],
    queryFn: ({ signal }) => api(listCheckpoints, { query: { order: 'newest', limit: 20, after } }, signal),
    placeholderData: keepPreviousData,
    staleTime: 0,
  })

/** The checkpoint over so many entries, for an address that names it by its size. */
export const checkpointOverOptions = (size: number | null) =>
  queryOptions({
    queryKey: ['ledger', 'checkpoints', 'over', size],
    enabled: size !== null,
    staleTime: Number.POSITIVE_INFINITY,
    queryFn: async ({ signal }) => {
      const page = await api(listCheckpoints, { query: { size: size ?? 0, limit: 1 } }, signal)
      return page.items[0] ?? null
    },
  })

/** Every key so far: changes are few and each lasts. */
export const ledgerKeysOptions = queryOptions({
  queryKey: ['ledger', 'keys'],
  queryFn: async ({ signal }) => (await api(listKeys, {}, signal)).items,
})

export type Compared = { from: number; to: number; path: string[]; fault: string | null }
export type Pair = { older: { name: string; note: string }; newer: { name: string; note: string } }

/** Asks for the proof between two signed checkpoints and checks it here, signatures included, once the keys are known. */
export const comparisonOptions = (
  pair: Pair | null,
  key: LedgerKey | null,
  changes: readonly KeyStatement[] | null,
) =>
  queryOptions({
    queryKey: ['ledger', 'consistency', pair?.older.note, pair?.newer.note, changes?.length],
    enabled: pair !== null && key !== null && changes !== null,
    staleTime: Number.POSITIVE_INFINITY,
    queryFn: ({ signal }) => compare(pair!, key!, changes!, signal),
  })

async function compare(
  { older, newer }: Pair,
  key: LedgerKey,
  changes: readonly KeyStatement[],
  signal: AbortSignal,
): Promise<Compared> {
  const read = await withCrypto((crypto) =>
    [older, newer].map(({ name, note }) => ({ name, ...checkNote(crypto, note, key, changes) })),
  )
  const [a, b] = read
  if (!a || !b || 'fault' in a || 'fault' in b) {
    const bad = read.find((one) => 'fault' in one)
    const fault = bad && 'message' in bad ? `${bad.name}: ${bad.message}` : 'A checkpoint cannot be read.'
    return { from: 0, to: 0, path: [], fault }
  }
  const sizes = { from: a.checkpoint.size, to: b.checkpoint.size }
  const needsProof = sizes.from > 0 && sizes.from <= sizes.to
  const proof = needsProof ? await proofBetween(sizes, signal) : null
  if (typeof proof === 'string') return { ...sizes, path: [], fault: proof }
  const fault = await withCrypto((crypto) => consistencyFault(crypto, a.checkpoint, b.checkpoint, proof))
  return { ...sizes, path: proof?.path ?? [], fault }
}

/** A server that cannot prove what was signed has lost it: its words are then what is wrong. */
async function proofBetween(query: { from: number; to: number }, signal: AbortSignal) {
  try {
    return await api(getConsistency, { query }, signal)
  } catch (error) {
    if (isOgeeError(error, 'invalid-request')) return error.message
    throw error
  }
}

/** All checkpoints as one text, newest last, as a server appends them to its file. */
export async function everyNote(signal: AbortSignal): Promise<string> {
  let text = ''
  for (let after: string | null | undefined; after !== null; ) {
    const page: { items: { note: string }[]; next: string | null } = await api(
      listCheckpoints,
      { query: { order: 'oldest', limit: 500, after } },
      signal,
    )
    text += page.items.map(({ note }) => note).join('')
    after = page.next
  }
  return text
}

export function useChangeKey() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (reason: string) => api(postKey, { body: { reason } }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['ledger'] }),
  })
}

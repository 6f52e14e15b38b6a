import { queryOptions } from '@tanstack/react-query'
import { getCheckpoint, getLedgerKey, getProof } from '../../../shared/contract/ledger.ts'
import { api } from '../../lib/api.ts'

export const checkpointOptions = queryOptions({
  queryKey: ['ledger', 'checkpoint'],
  queryFn: ({ signal }) => api(getCheckpoint, {}, signal),
  staleTime: 0,
})

export const ledgerKeyOptions = queryOptions({
  queryKey: ['ledger', 'key'],
  queryFn: ({ signal }) => api(getLedgerKey, {}, signal),
})

/** Against the newest checkpoint: read again when the page is opened again. */
export const proofOptions = (recordId: string) =>
  queryOptions({
    queryKey: ['ledger', 'proof', recordId],
    queryFn: ({ signal }) => api(getProof, { params: { recordId } }, signal),
    staleTime: 60_000,
  })

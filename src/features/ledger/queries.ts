import { queryOptions } from '@tanstack/react-query'
import { getCheckpoint, getLedgerKey } from '../../../shared/contract/ledger.ts'
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

import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import {
  type Instrument,
  type InstrumentChange,
  type InstrumentFacts,
  listInstruments,
  patchInstrument,
  postInstrument,
  putInstrumentRule,
} from '../../../shared/contract/instruments.ts'
import { api } from '../../lib/api.ts'

export const instrumentsOptions = queryOptions({
  queryKey: ['instruments'],
  queryFn: ({ signal }) => api(listInstruments, {}, signal),
})

/** Adds an instrument, or changes the one that was opened: what somebody else did in between is not lost. */
export function useSaveInstrument(opened: Instrument | null) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (facts: InstrumentFacts) => {
      if (opened === null) return api(postInstrument, { body: facts })
      const { id: _, ...body } = facts
      return api(patchInstrument, { params: { id: opened.id }, body, ifMatch: opened.etag })
    },
    onSettled: () => client.invalidateQueries({ queryKey: instrumentsOptions.queryKey }),
  })
}

export function useRetireInstrument({ id, etag }: Instrument) {
  const client = useQueryClient()
  const change: InstrumentChange = { retired: true }
  return useMutation({
    mutationFn: () => api(patchInstrument, { params: { id }, body: change, ifMatch: etag }),
    onSettled: () => client.invalidateQueries({ queryKey: instrumentsOptions.queryKey }),
  })
}

export function useSetRule() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (overdueAllowed: boolean) => api(putInstrumentRule, { body: { overdueAllowed } }),
    onSettled: () => client.invalidateQueries({ queryKey: instrumentsOptions.queryKey }),
  })
}

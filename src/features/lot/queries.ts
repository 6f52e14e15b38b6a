import {
  infiniteQueryOptions,
  type QueryClient,
  queryOptions,
  useMutation,
  useQueryClient,
} from '@tanstack/react-query'
import type { InputOf } from '../../../shared/contract/endpoint.ts'
import {
  postClose,
  postExpected,
  postLot,
  postReference,
  postSignOff,
} from '../../../shared/contract/lot-acts.ts'
import {
  getLot,
  type Lot,
  type LotDetail,
  type LotUnit,
  listLots,
  listLotUnits,
  listMissing,
  listStationMonths,
} from '../../../shared/contract/lots.ts'
import { limits } from '../../../shared/limits.ts'
import { api } from '../../lib/api.ts'

export type LotName = { key: string; lot: string }
export type LotFilters = { design?: string; state?: Lot['state'] }

/** Somebody may be trimming right now: how often an open lot is looked at. Milliseconds. */
const lookEveryMs = 3_000

export const lotsOptions = (filters: LotFilters) =>
  infiniteQueryOptions({
    queryKey: ['lots', 'list', filters],
    queryFn: ({ pageParam, signal }) =>
      api(listLots, { query: { ...filters, ...(pageParam ? { after: pageParam } : {}) } }, signal),
    initialPageParam: '',
    getNextPageParam: (page) => page.next ?? undefined,
    // Lots that are not counted yet are counted by asking again.
    refetchInterval: ({ state }) =>
      state.data?.pages.some((page) => page.items.some(({ counts }) => counts === null)) ? 1_000 : false,
  })

export const lotOptions = (name: LotName) =>
  queryOptions({
    queryKey: ['lots', 'one', name],
    queryFn: ({ signal }) => api(getLot, { params: name }, signal),
    refetchInterval: ({ state }) => (state.data && state.data.state !== 'open' ? false : lookEveryMs),
  })

export type LotUnits = { units: readonly LotUnit[]; newest: number; records: number }

/**
 * All units of a lot; asked again, only those that changed. What did not change stays the same object. Marking a reference unit
 * brings no record and changes how a unit stands: with other marks the units are read whole.
 */
export const lotUnitsOptions = (client: QueryClient, lot: LotDetail) => {
  const name = { key: lot.design, lot: lot.key }
  const queryKey = ['lots', 'units', name, lot.references]
  return queryOptions({
    queryKey,
    queryFn: async ({ signal }) => {
      const before = client.getQueryData<LotUnits>(queryKey)
      if (before) {
        const grown = await readUnits(name, before, signal)
        if (isWhole(grown)) return grown
      }
      return readUnits(name, { units: [], newest: 0, records: 0 }, signal)
    },
    structuralSharing: false,
    staleTime: Number.POSITIVE_INFINITY,
  })
}

/** False when a record has slipped in below the newest one that was seen. */
function isWhole({ units, records }: LotUnits): boolean {
  let sum = 0
  for (const unit of units) sum += unit.records
  return sum >= records
}

async function readUnits(name: LotName, before: LotUnits, signal: AbortSignal): Promise<LotUnits> {
  const bySerial = new Map(before.units.map((unit) => [unit.unit, unit]))
  const since = before.newest === 0 ? {} : { since: before.newest }
  let after: string | undefined
  let newest: number | null = null
  let records = 0
  do {
    const query = { ...since, limit: limits.pageMax, ...(after === undefined ? {} : { after }) }
    const page = await api(listLotUnits, { params: name, query }, signal)
    for (const unit of page.items) bySerial.set(unit.unit, unit)
    // What came in while the pages were read is asked for next time.
    newest ??= page.newest
    records = page.records
    after = page.next ?? undefined
  } while (after !== undefined)
  return { units: [...bySerial.values()], newest: newest ?? 0, records }
}

export const missingOptions = (name: LotName, etag: string) =>
  queryOptions({
    queryKey: ['lots', 'missing', name, etag],
    queryFn: ({ signal }) => api(listMissing, { params: name, query: { limit: limits.pageMax } }, signal),
    staleTime: Number.POSITIVE_INFINITY,
  })

export const stationMonthsOptions = (key: string, to: string | null) =>
  queryOptions({
    queryKey: ['lots', 'stations', key, to],
    queryFn: ({ signal }) =>
      api(listStationMonths, { params: { key }, query: to === null ? {} : { to } }, signal),
    staleTime: 60_000,
  })

/** Acts of a lot answer with the lot; everything else about it is asked again. */
function useLotAct<Input>(act: (input: Input) => Promise<LotDetail>) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: act,
    onSuccess: (lot) => {
      client.setQueryData(lotOptions({ key: lot.design, lot: lot.key }).queryKey, lot)
      void client.invalidateQueries({ queryKey: ['lots'] })
    },
  })
}

export const useOpenLot = () => useLotAct((body: InputOf<typeof postLot>['body']) => api(postLot, { body }))

export const useCloseLot = (params: LotName) => useLotAct(() => api(postClose, { params }))

export const useExpect = (params: LotName) =>
  useLotAct((serials: string[]) => api(postExpected, { params, body: { serials } }))

export const useSignOff = (params: LotName, etag: string) =>
  useLotAct((body: InputOf<typeof postSignOff>['body']) => api(postSignOff, { params, body, ifMatch: etag }))

export function useMarkReference(key: string) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: { unit: string; reference: boolean }) => api(postReference, { params: { key }, body }),
    // The lot then names other reference units, with which its units are read again.
    onSuccess: () => client.invalidateQueries({ queryKey: ['lots', 'one'] }),
  })
}

import { useQuery } from '@tanstack/react-query'
import { useMemo } from 'react'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import type { Which } from '../../features/lot/analyse.ts'
import { stationMonthsOptions } from '../../features/lot/queries.ts'
import { compareStations } from '../../features/lot/stations.ts'

/** The stations that trim a lot's design, compared as they stood when the lot ended. */
export function useComparison(lot: LotDetail, range: string, which: Which) {
  // To the end of the lot's last day: the answer stays the same while the day lasts.
  const to = lot.state === 'open' || lot.lastAt === null ? null : `${lot.lastAt.slice(0, 10)}T23:59:59.999Z`
  const { data, error } = useQuery(stationMonthsOptions(lot.design, to))
  const items = data?.items
  const comparison = useMemo(
    () => (items ? compareStations(items, range, which) : null),
    [items, range, which],
  )
  return { comparison, error }
}

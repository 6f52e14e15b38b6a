import { keepPreviousData, useQuery, useQueryClient } from '@tanstack/react-query'
import { useEffect, useRef } from 'react'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { lotUnitsOptions } from '../../features/lot/queries.ts'

/** The units of a lot, asked again for what changed as soon as the lot itself shows that something has. */
export function useLotUnits(lot: LotDetail) {
  const client = useQueryClient()
  const units = useQuery({
    ...lotUnitsOptions(client, lot),
    enabled: lot.records > 0,
    placeholderData: keepPreviousData,
  })
  const { refetch } = units
  const seen = useRef(lot.records)
  useEffect(() => {
    if (seen.current === lot.records) return
    const isFirst = seen.current === 0
    seen.current = lot.records
    // With the first record the query starts by itself.
    if (!isFirst) void refetch()
  }, [lot.records, refetch])
  return units
}

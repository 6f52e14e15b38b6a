import { useInfiniteQuery, useQuery } from '@tanstack/react-query'
import { designsOptions } from '../../features/design/queries.ts'
import type { FilterChoices } from '../../features/record/filter-row.tsx'
import { recordersOptions } from '../../features/record/queries.ts'
import { stationsOptions } from '../../features/station/queries.ts'

/** What the filters can be chosen from; a list that is not there yet, or not open, is empty and stops nobody. */
export function useChoices(): FilterChoices {
  const designs = useInfiniteQuery(designsOptions)
  const stations = useQuery(stationsOptions)
  const recorders = useQuery(recordersOptions)
  return {
    designs: designs.data?.pages.flatMap((page) => page.items.map((design) => design.key)) ?? [],
    stations: stations.data?.items.map(({ id, name }) => [id, name] as const) ?? [],
    recorders: recorders.data?.items.map(({ id, name }) => [id, name] as const) ?? [],
  }
}

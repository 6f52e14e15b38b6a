import { useQueryClient } from '@tanstack/react-query'
import { useNavigate } from 'react-router-dom'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { lotsOptions } from '../../features/lot/queries.ts'
import { paths } from '../../lib/paths.ts'
import { announce } from '../../ui/status.tsx'

/** Goes to the lot that stands so many places further down the list of the design's lots. */
export function useNeighbours({ design, key }: Pick<LotDetail, 'design' | 'key'>) {
  const client = useQueryClient()
  const navigate = useNavigate()
  return async (by: 1 | -1): Promise<void> => {
    const data = await client.fetchInfiniteQuery({ ...lotsOptions({ design }), staleTime: 60_000 })
    const lots = data.pages.flatMap((page) => page.items)
    const at = lots.findIndex((lot) => lot.key === key)
    const to = at < 0 ? undefined : lots[at + by]
    if (to) void navigate(paths.lot(to.design, to.key))
    else announce(by === 1 ? 'There is no earlier lot near.' : 'There is no later lot.')
  }
}

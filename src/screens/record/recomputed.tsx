import { useQuery, useQueryClient } from '@tanstack/react-query'
import type { Design } from '../../../shared/contract/design.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { chainOptions } from '../../features/record/queries.ts'
import { Loading } from '../../ui/loading.tsx'
import { Problem } from '../../ui/problem.tsx'
import { recompute } from './recompute.ts'
import { RecomputedTable } from './recomputed-table.tsx'

/** The stored points through the solver of this page; a file of its own, since it brings the solver. */
export default function Recomputed({ record, design }: { record: TrimRecord; design: Design }) {
  const chain = useQuery({
    ...chainOptions(useQueryClient(), record),
    enabled: record.effects === 'learned',
  })
  if (chain.error) return <Problem error={chain.error} />
  if (record.effects === 'learned' && !chain.data) return <Loading>Reading the pass before.</Loading>
  const again = recompute(record, design, chain.data)
  return again.is === 'done' ? <RecomputedTable again={again} /> : <p>{again.why}</p>
}

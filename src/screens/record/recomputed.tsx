import type { Design } from '../../../shared/contract/design.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { recompute } from './recompute.ts'
import { RecomputedTable } from './recomputed-table.tsx'

/** The stored points through the solver of this page; a file of its own, since it brings the solver. */
export default function Recomputed({ record, design }: { record: TrimRecord; design: Design }) {
  const again = recompute(record, design)
  return again.is === 'done' ? <RecomputedTable again={again} /> : <p>{again.why}</p>
}

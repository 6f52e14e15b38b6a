import type { Design } from '../../../shared/contract/design.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { Section } from '../../ui/section.tsx'
import { recompute } from './recompute.ts'
import { RecomputedTable } from './recomputed-table.tsx'
import { FoundPlot, LeftPlot } from './record-plot.tsx'

/** What needs the solver and the design's revision: the plot, and the result computed again beside the stored one. */
export default function RecordDrawn({ record, design }: { record: TrimRecord; design: Design }) {
  const { result } = record
  if (result === null) return null
  const again = recompute(record, design)
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
      {result.format === 'ogee.codes/1' ? (
        <FoundPlot design={design} result={result} />
      ) : (
        <LeftPlot design={design} result={result} />
      )}
      <Section title="Recomputed from the stored points" side="in this browser">
        {again.is === 'done' ? <RecomputedTable again={again} /> : <p>{again.why}</p>}
      </Section>
    </div>
  )
}

import { lazy, Suspense, useState } from 'react'
import type { Design } from '../../../shared/contract/design.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { Button } from '../../ui/button.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Section } from '../../ui/section.tsx'
import { FoundPlot, LeftPlot } from './record-plot.tsx'

const Recomputed = lazy(() => import('./recomputed.tsx'))

type DrawnProps = { record: TrimRecord; design: Design }

/** What needs the design's revision: the plot, and the result computed again beside the stored one. */
export default function RecordDrawn({ record, design }: DrawnProps) {
  const { result } = record
  if (result === null) return null
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
      {result.format === 'ogee.codes/1' ? (
        <FoundPlot design={design} result={result} />
      ) : (
        <LeftPlot design={design} result={result} />
      )}
      <Recomputation record={record} design={design} />
    </div>
  )
}

/** On request: few who read a record doubt its numbers, and the solver is the largest part of the page. */
function Recomputation(props: DrawnProps) {
  const [isAsked, setAsked] = useState(false)
  return (
    <Section title="Recomputed from the stored points" side={isAsked ? 'in this browser' : undefined}>
      {isAsked ? (
        <Suspense fallback={<Loading>Reading the solver.</Loading>}>
          <Recomputed {...props} />
        </Suspense>
      ) : (
        <p className="flex flex-wrap items-baseline gap-3 print:hidden">
          <Button onClick={() => setAsked(true)}>Recompute</Button>
          <span className="text-ink-2">Solves the stored points again here and compares bit for bit.</span>
        </p>
      )}
    </Section>
  )
}

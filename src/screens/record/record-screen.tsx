import { useQuery } from '@tanstack/react-query'
import { lazy, Suspense } from 'react'
import { useParams } from 'react-router-dom'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { revisionOptions } from '../../features/design/queries.ts'
import { Chain } from '../../features/record/chain.tsx'
import { LedgerPlace } from '../../features/record/ledger-place.tsx'
import { Notices } from '../../features/record/notices.tsx'
import { recordOptions } from '../../features/record/queries.ts'
import { RecordFacts } from '../../features/record/record-facts.tsx'
import { byText, kindSentence } from '../../features/record/words.ts'
import { Loading } from '../../ui/loading.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Section } from '../../ui/section.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { RecordActs } from './record-acts.tsx'
import { RecordResult } from './record-result.tsx'

const place = 'History'
// Plot and solver come after the numbers, which are what one opens a record for.
const RecordDrawn = lazy(() => import('./record-drawn.tsx'))
const RecordCodes = lazy(() => import('./record-codes.tsx'))
const RecordProof = lazy(() => import('../../features/ledger/record-proof.tsx'))
const RecordFindings = lazy(() => import('./record-findings.tsx'))

export default function RecordScreen() {
  const { id = '' } = useParams()
  const record = useQuery(recordOptions(id))
  if (record.error && !record.data) {
    return (
      <PageProblem place={place} what="Record" error={record.error} onRetry={() => void record.refetch()} />
    )
  }
  if (!record.data) return <Loading page>Reading the record.</Loading>
  return <RecordPage key={id} record={record.data} />
}

function RecordPage({ record }: { record: TrimRecord }) {
  return (
    <>
      <PageHead
        place={
          <>
            {'Record '}
            <Whole value={record.number} />
            {` · ${kindSentence(record)}`}
          </>
        }
        title={`Unit ${record.unit}, channel ${record.channel}`}
        tab={`Record ${record.number}`}
        state={
          <span className="inline-flex flex-wrap items-baseline gap-x-1.5">
            {record.verdict ? <Verdict verdict={record.verdict} /> : null}
            {record.verdict === 'suspect' && record.accepted ? '· accepted' : null}
            {'· '}
            <TimeText at={record.recordedAt} />
            {` UTC · ${byText(record.by.name, record.station)}`}
          </span>
        }
        acts={<RecordActs record={record} />}
      />
      <div className="mt-3 space-y-3.5">
        <Notices notices={record.notices} />
        <Chain record={record} />
        <RecordResult record={record} />
        <Drawn record={record} />
        <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
          <Section title="Made under">
            <RecordFacts record={record} />
          </Section>
          <LedgerPlace record={record}>
            <Suspense fallback={<Loading>Reading the proof.</Loading>}>
              <RecordProof record={record} />
            </Suspense>
          </LedgerPlace>
        </div>
        <Suspense fallback={<Loading>Reading the findings.</Loading>}>
          <RecordFindings record={record} />
          <RecordCodes record={record} />
        </Suspense>
      </div>
    </>
  )
}

function Drawn({ record }: { record: TrimRecord }) {
  const revision = useQuery({
    ...revisionOptions(record.design, record.revision),
    enabled: record.result !== null,
  })
  if (record.result === null) return null
  if (revision.error) return <Problem error={revision.error} />
  if (!revision.data) return <Loading>Reading the revision.</Loading>
  return (
    <Suspense fallback={<Loading>Reading the plot.</Loading>}>
      <RecordDrawn record={record} design={revision.data.document} />
    </Suspense>
  )
}

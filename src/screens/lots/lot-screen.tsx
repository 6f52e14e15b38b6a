import { useQuery } from '@tanstack/react-query'
import { lazy, Suspense } from 'react'
import { useParams } from 'react-router-dom'
import { lotOptions } from '../../features/lot/queries.ts'
import { Loading } from '../../ui/loading.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { WhenNear } from '../../ui/when-near.tsx'
import { LotPage } from './lot-page.tsx'

const LotFindings = lazy(() => import('./lot-findings.tsx'))

/** One lot. While it is open it is looked at every few seconds; nothing jumps, what is new is added. */
export default function LotScreen() {
  const { design = '', lot: key = '' } = useParams()
  const lot = useQuery(lotOptions({ key: design, lot: key }))
  if (lot.error && !lot.data) {
    return (
      <PageProblem place="Lots" what={`Lot ${key}`} error={lot.error} onRetry={() => void lot.refetch()} />
    )
  }
  if (!lot.data) return <Loading page>{`Reading lot ${key}.`}</Loading>
  return (
    <>
      <LotPage key={`${design} ${key}`} lot={lot.data} />
      <div className="print:hidden">
        <WhenNear name="findings" minHeight={64}>
          <Suspense fallback={<Loading>Reading the findings.</Loading>}>
            <LotFindings lot={lot.data} />
          </Suspense>
        </WhenNear>
      </div>
    </>
  )
}

import '../../lib/zod-words.ts'
import { useQuery } from '@tanstack/react-query'
import { lazy, Suspense, useState } from 'react'
import { useParams, useSearchParams } from 'react-router-dom'
import type { DesignLine } from '../../../shared/contract/designs.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { designOptions, revisionOptions } from '../../features/design/queries.ts'
import { isTemplate } from '../../features/design-form/template-list.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { Section } from '../../ui/section.tsx'
import { DesignPage } from '../design-page/design-page.tsx'

const RevisionTable = lazy(async () => ({
  default: (await import('../../features/design/revision-table.tsx')).RevisionTable,
}))
const NewDesign = lazy(() => import('./new-design.tsx'))

/**
 * One revision of a design: the number in the address, else the released one, else the newest. A key that does not exist
 * yet and a template in the address begin a new one.
 */
export default function DesignScreen() {
  const { key = '' } = useParams()
  return <OneDesign key={key} designKey={key} />
}

function OneDesign({ designKey }: { designKey: string }) {
  const { number } = useParams()
  const [search] = useSearchParams()
  const { role } = usePerson()
  const design = useQuery(designOptions(designKey))
  const template = search.get('template')
  const [isNew, setNew] = useState(false)
  const mayBegin = role === 'engineer' && isTemplate(template) && number === undefined
  if (!isNew && mayBegin && !design.data && isOgeeError(design.error, 'not-found')) setNew(true)
  if (isNew && isTemplate(template)) {
    // It stays what it is when the server has it too: whoever types goes on typing.
    return (
      <Suspense fallback={<Loading page>{`Starting design ${designKey}.`}</Loading>}>
        <NewDesign designKey={designKey} template={template} title={search.get('title') || designKey} />
      </Suspense>
    )
  }
  if (design.error && !design.data) {
    return (
      <PageProblem
        place="Designs"
        what={`Design ${designKey}`}
        error={design.error}
        onRetry={() => void design.refetch()}
      />
    )
  }
  if (!design.data) return <Loading page>{`Reading design ${designKey}.`}</Loading>
  const shown = whichRevision(design.data, number)
  if (shown === null) {
    return (
      <>
        <PageHead place={`Design ${designKey}`} title={design.data.title} />
        <Empty>Design {designKey} has no such revision.</Empty>
        <Section title="Revisions">
          <Suspense fallback={null}>
            <RevisionTable design={design.data} shown={0} />
          </Suspense>
        </Section>
      </>
    )
  }
  return <OneRevision key={shown} designKey={designKey} number={shown} />
}

function whichRevision(design: DesignLine, wanted: string | undefined): number | null {
  const numbers = design.revisions.map((revision) => revision.number)
  if (wanted === undefined || wanted === 'released') {
    return design.released ?? (numbers.length > 0 ? Math.max(...numbers) : null)
  }
  return numbers.find((number) => String(number) === wanted) ?? null
}

function OneRevision({ designKey, number }: { designKey: string; number: number }) {
  const { data, error, refetch } = useQuery(revisionOptions(designKey, number))
  if (data) return <DesignPage start={{ designKey, revision: data }} />
  if (error) {
    return (
      <PageProblem
        place={`Design ${designKey}`}
        what={`Revision ${number}`}
        error={error}
        onRetry={() => void refetch()}
      />
    )
  }
  return <Loading page>{`Reading revision ${number}.`}</Loading>
}

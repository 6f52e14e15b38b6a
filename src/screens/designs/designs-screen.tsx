import { useInfiniteQuery } from '@tanstack/react-query'
import { lazy, Suspense, useState } from 'react'
import { useNavigate } from 'react-router-dom'
import { DesignTable } from '../../features/design/design-table.tsx'
import { NewDesignDialog } from '../../features/design/new-design-dialog.tsx'
import { designsOptions } from '../../features/design/queries.ts'
import { templates } from '../../features/design-form/template-list.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { paths } from '../../lib/paths.ts'
import { Button } from '../../ui/button.tsx'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { WhenNear } from '../../ui/when-near.tsx'

const DesignLadders = lazy(() => import('./design-ladders.tsx'))

/** Sizing and the documents load for the rows that are looked at. */
const ladders = (designKey: string, number: number) => (
  <WhenNear name={`ladders-${designKey}`} minHeight={44}>
    <Suspense fallback={null}>
      <DesignLadders designKey={designKey} number={number} />
    </Suspense>
  </WhenNear>
)

export default function DesignsScreen() {
  const designs = useInfiniteQuery(designsOptions)
  const { role } = usePerson()
  const navigate = useNavigate()
  const [isStarting, setStarting] = useState(false)
  if (designs.error && !designs.data) {
    return (
      <PageProblem place="Ogee" what="Designs" error={designs.error} onRetry={() => void designs.refetch()} />
    )
  }
  const lines = designs.data?.pages.flatMap((page) => page.items) ?? []
  return (
    <>
      <PageHead
        place="Ogee"
        title="Designs"
        acts={
          role === 'engineer' ? (
            <Button look="primary" onClick={() => setStarting(true)}>
              New design
            </Button>
          ) : null
        }
      />
      {isStarting ? (
        <NewDesignDialog
          choices={templates}
          taken={lines.map(({ key }) => key)}
          onStart={(key, template, title) => void navigate(paths.newDesign(key, template, title))}
          onClose={() => setStarting(false)}
        />
      ) : null}
      {designs.isPending ? <Loading>Reading the designs.</Loading> : null}
      {designs.data && lines.length === 0 ? (
        <Empty>
          No design yet. {role === 'engineer' ? 'Start one from a template.' : 'An engineer starts one.'}
        </Empty>
      ) : null}
      {lines.length > 0 ? (
        <div className="mt-2">
          <DesignTable designs={lines} ladders={ladders} />
        </div>
      ) : null}
      {designs.hasNextPage ? (
        <Button
          className="mt-3"
          disabled={designs.isFetchingNextPage}
          onClick={() => void designs.fetchNextPage()}
        >
          More designs
        </Button>
      ) : null}
    </>
  )
}

import { useInfiniteQuery } from '@tanstack/react-query'
import { DesignTable } from '../../features/design/design-table.tsx'
import { designsOptions } from '../../features/design/queries.ts'
import { Button } from '../../ui/button.tsx'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'

export default function DesignsScreen() {
  const designs = useInfiniteQuery(designsOptions)
  if (designs.error && !designs.data) {
    return (
      <PageProblem place="Ogee" what="Designs" error={designs.error} onRetry={() => void designs.refetch()} />
    )
  }
  const lines = designs.data?.pages.flatMap((page) => page.items) ?? []
  return (
    <>
      <PageHead place="Ogee" title="Designs" />
      {designs.isPending ? <Loading>Reading the designs.</Loading> : null}
      {designs.data && lines.length === 0 ? (
        <Empty>
          No design yet. A token with the scope designs:write can send one; here they can be read.
        </Empty>
      ) : null}
      {lines.length > 0 ? (
        <div className="mt-2">
          <DesignTable designs={lines} />
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

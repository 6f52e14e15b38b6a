import { Suspense } from 'react'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { StateActs } from './on-demand.ts'
import type { DesignPageState } from './use-design-page.ts'
import type { RevisionActs } from './use-revision-acts.ts'

/** What can be done with the revision as it stands; one primary act. Who may not do a thing does not see it. */
export function HeadActs({
  page,
  acts,
  onDifferences,
  onRevisions,
  onSubmit,
}: {
  page: DesignPageState
  acts: RevisionActs
  onDifferences: () => void
  onRevisions: () => void
  onSubmit: () => void
}) {
  const { revision, designKey, number, person } = page
  const isEngineer = person.role === 'engineer'
  const several = (page.line?.revisions.length ?? 0) > 1
  return (
    <>
      {several ? (
        <Button look="quiet" onClick={onDifferences}>
          Differences
        </Button>
      ) : null}
      {number === null ? null : (
        <>
          <Button look="quiet" onClick={onRevisions}>
            Revisions
          </Button>
          <LinkButton look="plain" to={paths.benchFor({ design: designKey, revision: number })}>
            Try on Bench
          </LinkButton>
        </>
      )}
      {isEngineer && page.isEditable ? (
        <Button
          look="primary"
          disabled={acts.isBusy || !page.answered.isGood || page.isTried}
          onClick={onSubmit}
        >
          Send to review
        </Button>
      ) : null}
      {isEngineer && (revision?.state === 'in-review' || revision?.state === 'released') ? (
        <Suspense fallback={null}>
          <StateActs page={page} acts={acts} />
        </Suspense>
      ) : null}
    </>
  )
}

import { Suspense, useState } from 'react'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { ReasonDialog } from './on-demand.ts'
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
      {isEngineer && revision?.state === 'in-review' ? <ReviewActs page={page} acts={acts} /> : null}
      {isEngineer && revision?.state === 'released' ? <ReleasedActs page={page} acts={acts} /> : null}
    </>
  )
}

function ReviewActs({ page: { revision, person }, acts }: { page: DesignPageState; acts: RevisionActs }) {
  const [isReturning, setReturning] = useState(false)
  if (!revision) return null
  const wrote = revision.writers.some(({ id }) => id === person.id)
  return (
    <>
      <Button onClick={() => setReturning(true)} disabled={acts.isBusy}>
        Back to draft
      </Button>
      {wrote && !revision.authorMayRelease ? (
        <span className="max-w-72 text-body text-ink-2">
          You wrote this revision, so someone else releases it.
        </span>
      ) : (
        <>
          {wrote ? (
            <span className="max-w-72 text-body text-ink-2">
              You wrote this revision. It will say: released by its author.
            </span>
          ) : null}
          <Button look="primary" disabled={acts.isBusy} onClick={() => void acts.release(revision.etag)}>
            {`Release revision ${revision.number}`}
          </Button>
        </>
      )}
      {isReturning ? (
        <Suspense fallback={null}>
          <ReasonDialog
            title={`Send revision ${revision.number} back to draft`}
            act="Send back"
            onClose={() => setReturning(false)}
            onReason={async (reason) => {
              if (await acts.giveBack(revision.etag, reason)) setReturning(false)
            }}
            error={acts.error}
          />
        </Suspense>
      ) : null}
    </>
  )
}

function ReleasedActs({
  page: { revision, designKey, line },
  acts,
}: {
  page: DesignPageState
  acts: RevisionActs
}) {
  const [isWithdrawing, setWithdrawing] = useState(false)
  if (!revision) return null
  const next = Math.max(revision.number, ...(line?.revisions.map((one) => one.number) ?? [])) + 1
  return (
    <>
      <Button onClick={() => setWithdrawing(true)}>Withdraw</Button>
      <Button look="primary" disabled={acts.isBusy} onClick={() => void acts.startFrom(revision.number)}>
        {`Start revision ${next}`}
      </Button>
      {isWithdrawing ? (
        <Suspense fallback={null}>
          <ReasonDialog
            title={`Withdraw revision ${revision.number}`}
            act="Withdraw"
            usedBy={{ designKey, revision: revision.number }}
            onClose={() => setWithdrawing(false)}
            onReason={async (reason) => {
              if (await acts.withdraw(revision.etag, reason)) setWithdrawing(false)
            }}
            error={acts.error}
          />
        </Suspense>
      ) : null}
    </>
  )
}

import { lazy, Suspense, useState } from 'react'
import { Button } from '../../ui/button.tsx'
import type { DesignPageState } from './use-design-page.ts'
import type { RevisionActs } from './use-revision-acts.ts'

const ReasonDialog = lazy(() => import('../../features/design/reason-dialog.tsx'))

type ActsProps = { page: DesignPageState; acts: RevisionActs }

/** What an engineer does with a revision that is no draft any more. */
export default function StateActs(props: ActsProps) {
  return props.page.revision?.state === 'in-review' ? <ReviewActs {...props} /> : <ReleasedActs {...props} />
}

function ReviewActs({ page: { revision, person }, acts }: ActsProps) {
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

function ReleasedActs({ page: { revision, designKey, line }, acts }: ActsProps) {
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

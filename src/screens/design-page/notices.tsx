import { Suspense } from 'react'
import { toForm } from '../../features/design-form/to-form.ts'
import { Problem } from '../../ui/problem.tsx'
import { utcDay } from '../../ui/time-text.tsx'
import { ConflictBar, TriedNotice } from './on-demand.ts'
import type { DesignPageState } from './use-design-page.ts'
import type { RevisionActs } from './use-revision-acts.ts'

/** What must be known before anything else on the page. */
export function Notices({ page, acts }: { page: DesignPageState; acts: RevisionActs }) {
  const { draft, form, dispatch, revision } = page
  const { state } = draft
  return (
    <div className="space-y-2 empty:hidden [&:not(:empty)]:my-2">
      {state.is === 'conflict' ? (
        <Suspense fallback={null}>
          <ConflictBar
            theirs={state.theirs}
            mine={form.doc}
            onTheirs={() => {
              dispatch({ do: 'replace', doc: toForm(state.theirs.document) })
              draft.settle(state.theirs)
            }}
            onNewDraft={() => {
              const { document } = page.answered
              if (document) void acts.startWith(document).then(() => draft.settle(state.theirs))
            }}
          />
        </Suspense>
      ) : null}
      {page.isTried ? (
        <Suspense fallback={null}>
          <TriedNotice page={page} />
        </Suspense>
      ) : null}
      {revision?.state === 'released' && revision.releasedBy && revision.releasedAt ? (
        <p className="text-text">
          {`Released by ${revision.releasedBy} on ${utcDay(revision.releasedAt)}${revision.releasedByAuthor ? ', by its author' : ''}. Released revisions do not change.`}
        </p>
      ) : null}
      {revision?.state === 'withdrawn' ? (
        <p className="text-text">
          {`Withdrawn by ${revision.withdrawnBy} on ${utcDay(revision.withdrawnAt ?? '')}: ${revision.withdrawReason}`}
        </p>
      ) : null}
      {revision?.state === 'draft' && revision.returnReason ? (
        <p className="text-text">{`Sent back by ${revision.returnedBy}: ${revision.returnReason}`}</p>
      ) : null}
      {acts.error ? <Problem error={acts.error} /> : null}
    </div>
  )
}

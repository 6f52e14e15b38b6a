import { useQuery } from '@tanstack/react-query'
import { useRef } from 'react'
import type { Notice } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { utcText } from '../../ui/time-text.tsx'
import type { DraftStatus } from './draft.ts'
import { placedRecordOptions } from './queries.ts'

const clock = (instant: string): string => utcText(instant).slice(11)

/** The time is the one at which this page saw it there; a record opened later was there before. */
function placeOf(recordedAt: string, seenAt: number | null): string {
  if (seenAt === null) return 'Place in the ledger follows within a minute.'
  const isFresh = seenAt - new Date(recordedAt).getTime() < 60_000
  return isFresh ? `In the ledger since ${clock(new Date(seenAt).toISOString())}.` : 'In the ledger.'
}

/** Kept here until the server answers. Times are UTC, as everywhere. */
export function SavedStatus({ savedAt }: { savedAt: string }) {
  return (
    <div role="status" className="mt-2">
      <Caution>
        Saved on this computer at {clock(savedAt)}. Not yet sent. It is sent by itself, once, when the server
        answers.
      </Caution>
    </div>
  )
}

/** Asks for the record until it has its place; notices of the server come with it. */
export function RecordedStatus({ status }: { status: Extract<DraftStatus, { is: 'recorded' }> }) {
  const { data, dataUpdatedAt } = useQuery(placedRecordOptions(status.id))
  const seenFirst = useRef<number | null>(null)
  if (data?.ledger && seenFirst.current === null) seenFirst.current = dataUpdatedAt
  return (
    <>
      <div role="status" className="mt-2">
        <Caution tone="plain">
          {status.kind === 'verify' ? 'Recorded as left, as' : 'Recorded as'}{' '}
          <LinkButton to={paths.record(status.id)}>
            <Whole value={status.number} />
          </LinkButton>{' '}
          at {clock(status.recordedAt)}. {placeOf(status.recordedAt, seenFirst.current)}
          {status.accepted || status.kind === 'verify' ? null : ' Its codes are not accepted.'}
        </Caution>
      </div>
      <Notices notices={data?.notices ?? []} />
    </>
  )
}

export function Notices({ notices }: { notices: readonly Notice[] }) {
  return notices
    .filter((notice) => notice.code !== 'replayed')
    .map((notice) => (
      <div key={`${notice.code} ${notice.message}`} role="status" className="mt-2">
        <Caution>
          {notice.message}{' '}
          {notice.record ? <LinkButton to={paths.record(notice.record)}>See the record</LinkButton> : null}
        </Caution>
      </div>
    ))
}

import { useQuery } from '@tanstack/react-query'
import type { Notice } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { utcText } from '../../ui/time-text.tsx'
import type { DraftStatus } from './draft.ts'
import { placedRecordOptions } from './queries.ts'

const clock = (instant: string): string => utcText(instant).slice(11)

type RecordStatusProps = { status: DraftStatus; ledgerSince: string | null }

/** Where the record is: saved here, or recorded and in the ledger. Times are UTC, as everywhere. */
export function RecordStatus({ status, ledgerSince }: RecordStatusProps) {
  if (status.is === 'open') return null
  if (status.is === 'waiting') {
    return (
      <div role="status" className="mt-2">
        <Caution>
          Saved on this computer at {clock(status.savedAt)}. Not yet sent. It is sent by itself, once, when
          the server answers.
        </Caution>
      </div>
    )
  }
  return (
    <div role="status" className="mt-2">
      <Caution tone="plain">
        Recorded as{' '}
        <LinkButton to={paths.record(status.id)}>
          <Whole value={status.number} />
        </LinkButton>{' '}
        at {clock(status.recordedAt)}.{' '}
        {ledgerSince
          ? `In the ledger since ${clock(ledgerSince)}.`
          : 'Place in the ledger follows within a minute.'}
        {status.accepted ? null : ' Its codes are not accepted.'}
      </Caution>
    </div>
  )
}

/** Asks for the record until it has its place; notices of the server come with it. */
export function RecordedStatus({ status }: { status: Extract<DraftStatus, { is: 'recorded' }> }) {
  const { data, dataUpdatedAt } = useQuery(placedRecordOptions(status.id))
  const since = data?.ledger ? new Date(dataUpdatedAt).toISOString() : null
  return (
    <>
      <RecordStatus status={status} ledgerSince={since} />
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

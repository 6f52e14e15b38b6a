import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'

/** What happened around the record; it changes nothing in it. */
export function Notices({ notices }: { notices: TrimRecord['notices'] }) {
  if (notices.length === 0) return null
  return (
    <Caution>
      <ul>
        {notices.map((notice) => (
          <li key={`${notice.code} ${notice.record ?? ''}`}>
            {notice.message}{' '}
            {notice.record ? <LinkButton to={paths.record(notice.record)}>that record</LinkButton> : null}
          </li>
        ))}
      </ul>
    </Caution>
  )
}

import { lazy, Suspense, useState } from 'react'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { AmendDialog } from '../../features/record/amend-dialog.tsx'
import { CertificateButton } from '../../features/record/certificate-button.tsx'
import { usePerson } from '../../features/session/use-person.ts'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { download } from '../../ui/download.ts'

const RecordFind = lazy(() => import('./record-find.tsx'))

/** Acts that are not open to somebody are absent, not grey. */
export function RecordActs({ record }: { record: TrimRecord }) {
  const { role } = usePerson()
  const [open, setOpen] = useState<'override' | 'withdraw' | 'find' | null>(null)
  const notice = (code: TrimRecord['notices'][number]['code']) =>
    record.notices.some((one) => one.code === code)
  const measured = record.kind === 'trim' || record.kind === 'verify'
  const mayAmend = role === 'engineer' && measured && !notice('withdrawn')
  const mayOverride = mayAmend && record.verdict === 'suspect' && !record.accepted && !notice('overridden')
  const { design, unit, channel, range } = record
  return (
    <>
      <Button
        look="quiet"
        onClick={() =>
          download(`record-${record.number}.json`, `${JSON.stringify(record, null, 2)}\n`, 'application/json')
        }
      >
        JSON
      </Button>
      {measured && (role === 'engineer' || role === 'operator') ? (
        <LinkButton to={paths.benchFor({ design, unit, channel, range, follows: record.id })}>
          Next pass on Bench
        </LinkButton>
      ) : null}
      {mayAmend ? <Button onClick={() => setOpen('withdraw')}>Withdraw</Button> : null}
      {mayOverride ? (
        <Button look="primary" onClick={() => setOpen('override')}>
          Override
        </Button>
      ) : null}
      {role === 'auditor' ? <Button onClick={() => setOpen('find')}>Write a finding</Button> : null}
      {record.ledger ? (
        <CertificateButton record={record} look={role === 'auditor' ? 'primary' : 'plain'} />
      ) : null}
      {open === 'find' ? (
        <Suspense fallback={null}>
          <RecordFind record={record} onClose={() => setOpen(null)} />
        </Suspense>
      ) : null}
      {open === 'override' || open === 'withdraw' ? (
        <AmendDialog record={record} kind={open} onClose={() => setOpen(null)} />
      ) : null}
    </>
  )
}

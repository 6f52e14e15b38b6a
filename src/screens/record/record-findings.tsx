import { lazy, Suspense, useState } from 'react'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { Findings } from '../../features/finding/findings.tsx'
import type { Writing } from '../../features/finding/queries.ts'
import { usePerson } from '../../features/session/use-person.ts'

const WriteDialog = lazy(() =>
  import('../../features/finding/write-dialog.tsx').then(({ WriteDialog }) => ({ default: WriteDialog })),
)

type Open = { draft: string; choices: (readonly [string, Writing])[] }

/** Findings on the record and on its lot; an engineer answers, an auditor closes. */
export default function RecordFindings({ record }: { record: TrimRecord }) {
  const { role } = usePerson()
  const [open, setOpen] = useState<Open | null>(null)
  return (
    <>
      <Findings
        about={{ record: record.id }}
        role={role}
        onAct={(finding, act) =>
          setOpen({ draft: `${act}.${finding.id}`, choices: [[act, { act, finding: finding.id }]] })
        }
      />
      {open ? (
        <Suspense fallback={null}>
          <WriteDialog {...open} onClose={() => setOpen(null)} />
        </Suspense>
      ) : null}
    </>
  )
}

import { lazy, Suspense, useState } from 'react'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { Findings } from '../../features/finding/findings.tsx'
import type { Writing } from '../../features/finding/queries.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { Button } from '../../ui/button.tsx'

const WriteDialog = lazy(() =>
  import('../../features/finding/write-dialog.tsx').then(({ WriteDialog }) => ({ default: WriteDialog })),
)

type Open = { draft: string; choices: (readonly [string, Writing])[] }

/** Findings on the lot and on its records. */
export default function LotFindings({ lot }: { lot: LotDetail }) {
  const { role } = usePerson()
  const [open, setOpen] = useState<Open | null>(null)
  const { design, key } = lot
  const subject = { kind: 'lot', design, lot: key } as const
  return (
    <div className="mt-4">
      <Findings
        about={{ design, lot: key }}
        role={role}
        onAct={(finding, act) =>
          setOpen({ draft: `${act}.${finding.id}`, choices: [[act, { act, finding: finding.id }]] })
        }
      />
      {role === 'auditor' ? (
        <Button
          className="mt-3"
          onClick={() =>
            setOpen({ draft: `${design}.${key}`, choices: [[`lot ${key}`, { act: 'find', subject }]] })
          }
        >
          Write a finding
        </Button>
      ) : null}
      {open ? (
        <Suspense fallback={null}>
          <WriteDialog {...open} onClose={() => setOpen(null)} />
        </Suspense>
      ) : null}
    </div>
  )
}

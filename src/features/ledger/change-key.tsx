import { type FormEvent, useState } from 'react'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextArea } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useChangeKey } from './checkpoint-queries.ts'

/** Puts a new key in force, for a reason that stands in the ledger. */
export function ChangeKeyDialog({ onClose }: { onClose: () => void }) {
  const [reason, setReason] = useState('')
  const [wasTried, setTried] = useState(false)
  const change = useChangeKey()
  const problem =
    reason.trim().length < limits.reasonMin
      ? `Give a reason of at least ${limits.reasonMin} characters.`
      : null
  const send = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (problem !== null) return
    change.mutate(reason.trim(), {
      onSuccess: ({ number }) => {
        announce(`Key ${number} is in force.`)
        onClose()
      },
    })
  }
  return (
    <Dialog title="Change the ledger's key" onClose={onClose}>
      <form onSubmit={send} className="space-y-3">
        <p className="text-text">
          The server makes a new key; both keys sign the change, and it becomes an entry. What the old key
          signed still checks. Servers on other machines need a copy of the new key file.
        </p>
        <Field label="Reason" error={wasTried ? problem : null}>
          <TextArea
            data-first
            value={reason}
            maxLength={limits.reasonMax}
            onChange={(event) => setReason(event.target.value)}
          />
        </Field>
        {change.error ? <Problem error={change.error} /> : null}
        <div className="flex gap-3">
          <Button type="submit" look="primary" disabled={change.isPending}>
            Change the key
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </div>
      </form>
    </Dialog>
  )
}

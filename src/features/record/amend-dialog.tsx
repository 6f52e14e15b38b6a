import { type FormEvent, useState } from 'react'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { limits } from '../../../shared/limits.ts'
import { useDraft } from '../../lib/use-draft.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextArea } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useAmend } from './queries.ts'

const words = {
  override: {
    title: 'Accept a suspect record',
    says: 'The record stays as it is, marked suspect. The override is a record of its own with your name and reason; the codes then count as the current ones.',
    act: 'Record the override',
    done: 'Override recorded.',
  },
  withdraw: {
    title: 'Withdraw a record made in error',
    says: 'The record stays and is not changed. It no longer counts for current codes, yield or charts.',
    act: 'Record the withdrawal',
    done: 'Withdrawal recorded.',
  },
} as const

const asText = (stored: unknown) => (typeof stored === 'string' ? stored : null)

/** The reason is kept as a draft until the act is recorded. */
export function AmendDialog({
  record,
  kind,
  onClose,
}: {
  record: TrimRecord
  kind: 'override' | 'withdraw'
  onClose: () => void
}) {
  const [reason, setReason, discard] = useDraft(`draft.${kind}.${record.id}`, asText, '')
  const [tried, setTried] = useState(false)
  const amend = useAmend(record, kind)
  const length = reason.trim().length
  const error =
    tried && length < limits.reasonMin ? `At least ${limits.reasonMin} characters; ${length} are here.` : ''
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (length < limits.reasonMin || amend.isPending) return
    amend.mutate(reason.trim(), {
      onSuccess: () => {
        discard()
        announce(words[kind].done)
        onClose()
      },
    })
  }
  return (
    <Dialog title={words[kind].title} onClose={onClose}>
      <form onSubmit={submit} noValidate className="space-y-3">
        <p>{words[kind].says}</p>
        <Field
          label="Reason"
          error={error}
          hint="Kept in the record with your name. At least ten characters."
        >
          <TextArea
            data-first
            maxLength={limits.reasonMax}
            value={reason}
            onChange={(event) => setReason(event.target.value)}
          />
        </Field>
        <Problem error={amend.error} />
        <div className="flex gap-3">
          <Button look="primary" type="submit" disabled={amend.isPending}>
            {words[kind].act}
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </div>
      </form>
    </Dialog>
  )
}

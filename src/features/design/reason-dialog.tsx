import { useQuery } from '@tanstack/react-query'
import { type FormEvent, useState } from 'react'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextArea } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { usageOptions } from './queries.ts'
import { usageSentence } from './usage-words.ts'

/** Asks for the reason of an act that others will read about, and says what still uses what is taken away. */
export default function ReasonDialog({
  title,
  act,
  usedBy,
  onReason,
  onClose,
  error,
}: {
  title: string
  act: string
  usedBy?: { designKey: string; revision: number }
  onReason: (reason: string) => Promise<void>
  onClose: () => void
  error: unknown
}) {
  const [reason, setReason] = useState('')
  const [wasTried, setTried] = useState(false)
  const clean = reason.trim()
  const problem =
    clean.length < limits.reasonMin ? `Give a reason of at least ${limits.reasonMin} characters.` : null
  const send = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (problem === null) void onReason(clean)
  }
  return (
    <Dialog title={title} onClose={onClose}>
      <form onSubmit={send} className="space-y-3">
        {usedBy ? <StillUsed {...usedBy} /> : null}
        <Field label="Reason" error={wasTried ? problem : null}>
          <TextArea
            data-first
            value={reason}
            maxLength={limits.reasonMax}
            onChange={(event) => setReason(event.target.value)}
          />
        </Field>
        {error ? <Problem error={error} /> : null}
        <div className="flex gap-3">
          <Button type="submit" look="primary">
            {act}
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </div>
      </form>
    </Dialog>
  )
}

function StillUsed({ designKey, revision }: { designKey: string; revision: number }) {
  const { data } = useQuery(usageOptions(designKey))
  const use = data?.items.find((one) => one.revision === revision)
  if (!use) return null
  return <p className="text-text">{usageSentence(use)}</p>
}

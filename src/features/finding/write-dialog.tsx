import { type FormEvent, useState } from 'react'
import { limits } from '../../../shared/limits.ts'
import { useDraft } from '../../lib/use-draft.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { Select, TextArea } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useWrite, type Writing } from './queries.ts'

const words = {
  find: { title: 'Write a finding', act: 'Keep the finding', done: 'Finding kept.' },
  answer: { title: 'Answer the finding', act: 'Keep the answer', done: 'Answer kept.' },
  close: { title: 'Close the finding', act: 'Close the finding', done: 'Finding closed.' },
} as const

const asText = (stored: unknown) => (typeof stored === 'string' ? stored : null)

/** The words are a draft on this computer until they are kept. `choices` are what a finding can be about. */
export function WriteDialog({
  draft,
  choices,
  onClose,
}: {
  /** Names the draft. */
  draft: string
  choices: readonly (readonly [name: string, writing: Writing])[]
  onClose: () => void
}) {
  const [text, setText, discard] = useDraft(`draft.finding.${draft}`, asText, '')
  const [tried, setTried] = useState(false)
  const [chosen, setChosen] = useState(0)
  const write = useWrite()
  const writing = choices[chosen]?.[1]
  if (!writing) return null
  const length = [...text.trim()].length
  const error =
    tried && length < limits.reasonMin ? `At least ${limits.reasonMin} characters; ${length} are here.` : ''
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (length < limits.reasonMin || write.isPending) return
    write.mutate(
      { writing, text: text.trim() },
      {
        onSuccess: () => {
          discard()
          announce(words[writing.act].done)
          onClose()
        },
      },
    )
  }
  return (
    <Dialog title={words[writing.act].title} onClose={onClose}>
      <form onSubmit={submit} noValidate className="space-y-3">
        <p>Findings are kept for good. They change nothing else.</p>
        {choices.length > 1 ? (
          <Field label="About">
            <Select value={chosen} onChange={(event) => setChosen(Number(event.target.value))}>
              {choices.map(([name], i) => (
                <option key={name} value={i}>
                  {name}
                </option>
              ))}
            </Select>
          </Field>
        ) : null}
        <Field label="Words" error={error} hint="Kept with your name. At least ten characters.">
          <TextArea
            data-first
            rows={4}
            maxLength={limits.findingMax}
            value={text}
            onChange={(event) => setText(event.target.value)}
          />
        </Field>
        <Problem error={write.error} />
        <div className="flex gap-3">
          <Button look="primary" type="submit" disabled={write.isPending}>
            {words[writing.act].act}
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </div>
      </form>
    </Dialog>
  )
}

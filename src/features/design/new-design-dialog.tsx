import { type FormEvent, useState } from 'react'
import { designKey } from '../../../shared/contract/primitives.ts'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'

type Choice = { name: string; word: string; says: string }

/** Key, title and starting point of a new design. It is created with its first good values. */
export function NewDesignDialog({
  choices,
  taken,
  onStart,
  onClose,
}: {
  choices: readonly Choice[]
  taken: readonly string[]
  onStart: (key: string, template: string, title: string) => void
  onClose: () => void
}) {
  const [key, setKey] = useState('')
  const [title, setTitle] = useState('')
  const [template, setTemplate] = useState(choices[0]?.name ?? '')
  const [wasTried, setTried] = useState(false)
  const problem = keyProblem(key.trim(), taken)
  const start = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (problem === null) onStart(key.trim(), template, title.trim())
  }
  return (
    <Dialog title="New design" onClose={onClose}>
      <form onSubmit={start} className="space-y-3">
        <Field
          label="Key"
          hint="Letters, digits, dot, dash or underscore. It stays."
          error={wasTried ? problem : null}
        >
          <TextInput data-first value={key} onChange={(event) => setKey(event.target.value)} />
        </Field>
        <Field label="Title">
          <TextInput
            value={title}
            maxLength={limits.titleMax}
            onChange={(event) => setTitle(event.target.value)}
          />
        </Field>
        <fieldset className="space-y-1">
          <legend className="mb-1 text-small text-ink-2">Template</legend>
          {choices.map((choice) => (
            <label key={choice.name} className="flex items-baseline gap-2">
              <input
                type="radio"
                name="template"
                className="accent-ink"
                checked={template === choice.name}
                onChange={() => setTemplate(choice.name)}
              />
              <span>
                {choice.word}
                <span className="block text-small text-ink-3">{choice.says}</span>
              </span>
            </label>
          ))}
        </fieldset>
        <div className="flex gap-3">
          <Button type="submit" look="primary">
            Start
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </div>
      </form>
    </Dialog>
  )
}

function keyProblem(key: string, taken: readonly string[]): string | null {
  if (key === '') return 'Key is missing.'
  const checked = designKey.safeParse(key)
  if (!checked.success) return checked.error.issues[0]?.message ?? 'Key cannot be read.'
  return taken.includes(key) ? `There is a design ${key} already.` : null
}

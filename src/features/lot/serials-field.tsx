import { type ChangeEvent, useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { parseSerials } from '../../../shared/lots/serials.ts'
import { Field } from '../../ui/field.tsx'
import { TextArea } from '../../ui/input.tsx'

export type Serials = {
  text: string
  list: readonly string[]
  error: string | null
  setText: (text: string) => void
}

/** Serials as typed, pasted or read from a file; nothing is an empty list. */
export function useSerials(): Serials {
  const [text, setText] = useState('')
  const read = readSerials(text)
  return { text, setText, ...read }
}

function readSerials(text: string): Pick<Serials, 'list' | 'error'> {
  if (text.trim() === '') return { list: [], error: null }
  try {
    const list = parseSerials(text)
    const isFull = list.length > limits.lotExpectedMax
    return {
      list,
      error: isFull ? `A lot expects at most ${limits.lotExpectedMax} units; ${list.length} are here.` : null,
    }
  } catch (error) {
    return { list: [], error: isOgeeError(error) ? error.message : 'The serials cannot be read.' }
  }
}

export function SerialsField({ serials, label }: { serials: Serials; label: string }) {
  const count = serials.list.length
  const take = async ({ target }: ChangeEvent<HTMLInputElement>) => {
    const [file] = target.files ?? []
    if (file) serials.setText(await file.text())
    target.value = ''
  }
  return (
    <>
      <Field
        label={label}
        error={serials.error ?? undefined}
        hint={
          count === 0
            ? 'May be left out. One serial a line, or a CSV with the column unit.'
            : `${count} ${count === 1 ? 'serial' : 'serials'} understood.`
        }
      >
        <TextArea rows={4} value={serials.text} onChange={(event) => serials.setText(event.target.value)} />
      </Field>
      <label className="inline-flex min-h-7 items-center gap-2 text-small text-ink-2">
        From a file
        <input
          type="file"
          className="max-w-full file:mr-2 file:min-h-7 file:rounded-sm file:border file:border-rule file:px-3 file:font-semibold"
          accept=".csv,.txt,text/csv,text/plain"
          onChange={(event) => void take(event)}
        />
      </label>
    </>
  )
}

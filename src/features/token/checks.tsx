import type { ReactNode } from 'react'
import { Checkbox } from '../../ui/input.tsx'

/** Several of a list, each a checkbox; the order of the list is kept. */
export function Checks<Value extends string>({
  legend,
  note,
  error,
  all,
  chosen,
  word,
  onChange,
}: {
  legend: string
  note?: string
  error?: string | undefined
  all: readonly Value[]
  chosen: readonly Value[]
  word: (value: Value) => ReactNode
  onChange: (chosen: Value[]) => void
}) {
  return (
    <fieldset className="grid grid-cols-1 gap-x-2 narrow:grid-cols-[7rem_1fr]">
      <legend className="float-left text-ink-2">{legend}</legend>
      <div className="flex flex-col narrow:col-start-2">
        {note ? <span className="min-h-6 text-small text-ink-3">{note}</span> : null}
        {all.map((value) => (
          <Checkbox
            key={value}
            checked={chosen.includes(value)}
            onChange={(event) =>
              onChange(all.filter((one) => (one === value ? event.target.checked : chosen.includes(one))))
            }
          >
            {word(value)}
          </Checkbox>
        ))}
        {error ? (
          <span role="alert" className="text-small text-bad">
            {error}
          </span>
        ) : null}
      </div>
    </fieldset>
  )
}

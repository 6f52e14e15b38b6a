import { type ReactNode, useEffect, useState } from 'react'
import type { DesignLine, Revision } from '../../../shared/contract/designs.ts'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'
import type { BenchSearch } from './search.ts'

type Change = (part: Partial<BenchSearch>) => void

/** Which design, revision, range and channel. Another design or revision begins anew: ranges and codes are its own. */
export function DesignFields(props: {
  designs: readonly DesignLine[]
  revision: Revision
  range: string
  channel: string
  change: Change
}) {
  const { designs, revision, range, channel, change } = props
  const { ranges, channels } = revision.document
  const fresh = { range: null, channel: null, applied: null, follows: null, lot: null }
  const choose = (value: string) => {
    const [design = '', number = ''] = value.split(' ')
    const isReleased = designs.find((one) => one.key === design)?.released === Number(number)
    change({ ...fresh, design, revision: isReleased || number === '' ? null : Number(number) })
  }
  return (
    <>
      <Choice
        label="design"
        value={`${revision.key} ${revision.number}`}
        onChange={choose}
        options={designs.flatMap((design) =>
          design.revisions.map(
            (one) =>
              [
                `${design.key} ${one.number}`,
                one.state === 'released'
                  ? `${design.key}, released ${one.number}`
                  : `${design.key}, ${one.state.replace('-', ' ')} ${one.number}`,
              ] as const,
          ),
        )}
      />
      {ranges.length > 1 ? (
        <Choice
          label="range"
          value={range}
          onChange={(id) => change({ range: id, applied: null, follows: null })}
          options={ranges.map((one) => [one.id, one.label ?? one.id])}
        />
      ) : null}
      {channels.length > 1 ? (
        <Choice
          label="channel"
          value={channel}
          onChange={(name) => change({ channel: name, applied: null, follows: null })}
          options={channels.map((name) => [name, name])}
        />
      ) : null}
    </>
  )
}

/** On a narrow page a long choice is cut, not the page widened; printed without its arrow. */
export const narrowSelect = '!max-w-48 narrow:!max-w-full print:appearance-none'

type ChoiceProps = {
  label: string
  value: string
  options: readonly (readonly [string, string])[]
  onChange: (value: string) => void
  error?: ReactNode
  isFixed?: boolean
}

export function Choice({ label, value, options, onChange, error, isFixed = false }: ChoiceProps) {
  return (
    <Field label={label} layout="inline" error={error}>
      <Select
        className={narrowSelect}
        value={value}
        disabled={isFixed}
        onChange={(event) => onChange(event.target.value)}
      >
        {options.map(([name, text]) => (
          <option key={name} value={name}>
            {text}
          </option>
        ))}
      </Select>
    </Field>
  )
}

type LineFieldProps = {
  label: string
  value: string
  /** Called when the field is left or Enter is pressed. */
  onCommit: (value: string, byEnter: boolean) => void
  error?: ReactNode
  chars: number
  /** A sentence when the text cannot be taken; then it is not committed and stays as typed. */
  check?: (text: string) => string | null
  id?: string
  placeholder?: string
}

/** A line of text that counts only when it is finished: a half-typed serial is no unit. */
export function LineField(props: LineFieldProps) {
  const { label, value, onCommit, error, chars, check, id, placeholder } = props
  const [text, setText] = useState(value)
  const [wrong, setWrong] = useState<string | null>(null)
  useEffect(() => setText(value), [value])
  const commit = (byEnter: boolean) => {
    const sentence = check?.(text) ?? null
    setWrong(sentence)
    if (sentence !== null) return
    if (text !== value || byEnter) onCommit(text, byEnter)
  }
  return (
    <Field label={label} layout="inline" error={wrong ?? error}>
      <TextInput
        value={text}
        size={chars}
        data-field={id}
        placeholder={placeholder}
        onChange={(event) => setText(event.target.value)}
        onBlur={() => commit(false)}
        onKeyDown={(event) => {
          if (event.key === 'Escape') setText(value)
          if (event.key !== 'Enter' || event.ctrlKey) return
          event.preventDefault()
          commit(true)
        }}
        className="!w-auto"
      />
    </Field>
  )
}

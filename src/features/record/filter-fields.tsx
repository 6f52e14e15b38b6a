import { type KeyboardEvent, type Ref, useEffect, useState } from 'react'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'

const inForce = 'border-b-2! border-ink! font-semibold'

export type ChoiceOption = readonly [value: string, word: string]

/** One of some values. A value of the address that is not among them stays choosable. */
export function ChoiceFilter({
  label,
  none = 'any',
  value,
  choices,
  onChange,
}: {
  label: string
  /** The word for no filter. */
  none?: string
  value: string
  choices: readonly ChoiceOption[]
  onChange: (value: string) => void
}) {
  const known = value === '' || choices.some(([choice]) => choice === value)
  return (
    <Field label={label} layout="inline">
      <Select
        value={value}
        className={value === '' ? '' : inForce}
        onChange={(event) => onChange(event.target.value)}
      >
        <option value="">{none}</option>
        {known ? null : <option value={value}>{value.replaceAll(',', ', ')}</option>}
        {choices.map(([choice, word]) => (
          <option key={choice} value={choice}>
            {word}
          </option>
        ))}
      </Select>
    </Field>
  )
}

/** Taken on Enter and on leaving the field, not on each letter: each change is a page of its own in the history. */
export function TextFilter({
  label,
  value,
  none = 'any',
  width,
  isValid,
  wrong,
  onChange,
  inputRef,
}: {
  label: string
  value: string
  none?: string
  width: string
  isValid: (text: string) => boolean
  /** Said of a text that is not valid. */
  wrong: string
  onChange: (value: string) => void
  inputRef?: Ref<HTMLInputElement>
}) {
  const [typed, setTyped] = useState(value)
  useEffect(() => setTyped(value), [value])
  const text = typed.trim()
  const bad = text !== '' && text !== value && !isValid(text)
  const take = () => {
    if (text !== value && !bad) onChange(text)
  }
  const onKeyDown = (event: KeyboardEvent<HTMLInputElement>) => {
    if (event.key === 'Enter') take()
    if (event.key === 'Escape') {
      setTyped(value)
      event.currentTarget.blur()
    }
  }
  return (
    <Field label={label} layout="inline" error={bad ? wrong : undefined}>
      <TextInput
        ref={inputRef}
        value={typed}
        placeholder={none}
        className={`${width} ${value === '' ? '' : inForce}`}
        onChange={(event) => setTyped(event.target.value)}
        onBlur={take}
        onKeyDown={onKeyDown}
      />
    </Field>
  )
}

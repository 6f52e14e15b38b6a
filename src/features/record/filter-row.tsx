import { type KeyboardEvent, type Ref, useEffect, useState } from 'react'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { verdictWord } from '../../ui/verdict.tsx'
import { type Filters, kindChoices, verdictChoices } from './filters.ts'
import { kindWord } from './words.ts'

const inForce = 'border-b-2! border-ink! font-semibold'

/** A row of filters that reads as a sentence; the ones in force are underlined in ink. */
export function FilterRow({
  filters,
  designs,
  onChange,
  onClear,
  unitRef,
}: {
  filters: Filters
  designs: readonly string[]
  onChange: (name: keyof Filters, value: string) => void
  onClear: () => void
  unitRef: Ref<HTMLInputElement>
}) {
  const count = Object.keys(filters).length
  // A design of the address that is not in the list (not loaded, or not open to this person) stays choosable.
  const choices = filters.design && !designs.includes(filters.design) ? [filters.design, ...designs] : designs
  return (
    <form
      aria-label="Filters"
      onSubmit={(event) => event.preventDefault()}
      className="flex flex-wrap items-baseline gap-x-5 gap-y-1.5 py-2 print:hidden"
    >
      <UnitFilter value={filters.unit ?? ''} onChange={(unit) => onChange('unit', unit)} inputRef={unitRef} />
      <Choice
        label="design"
        value={filters.design ?? ''}
        choices={choices.map((key) => [key, key])}
        onChange={(value) => onChange('design', value)}
      />
      <Choice
        label="kind"
        value={filters.kind ?? ''}
        choices={kindChoices.map((kind) => [kind, kindWord({ kind, pass: 1 })])}
        onChange={(value) => onChange('kind', value)}
      />
      <Choice
        label="verdict"
        value={filters.verdict ?? ''}
        choices={verdictChoices.map((verdict) => [verdict, verdictWord(verdict)])}
        onChange={(value) => onChange('verdict', value)}
      />
      {count > 0 ? (
        <Button look="quiet" className="text-small" onClick={onClear}>
          {count === 1 ? 'clear the filter' : `clear ${count} filters`}
        </Button>
      ) : null}
      <FilterKeys />
    </form>
  )
}

function FilterKeys() {
  return (
    <span aria-hidden="true" className="ml-auto hidden gap-3 text-small text-ink-2 wide:flex">
      <span>
        <KeyHint keys="/" /> filter
      </span>
      <span>
        <KeyHint keys="j k" /> move
      </span>
      <span>
        <KeyHint keys="Enter" /> open
      </span>
    </span>
  )
}

function Choice({
  label,
  value,
  choices,
  onChange,
}: {
  label: string
  value: string
  choices: readonly (readonly [string, string])[]
  onChange: (value: string) => void
}) {
  return (
    <Field label={label} layout="inline">
      <Select
        value={value}
        className={value === '' ? '' : inForce}
        onChange={(event) => onChange(event.target.value)}
      >
        <option value="">any</option>
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
function UnitFilter({
  value,
  onChange,
  inputRef,
}: {
  value: string
  onChange: (unit: string) => void
  inputRef: Ref<HTMLInputElement>
}) {
  const [typed, setTyped] = useState(value)
  useEffect(() => setTyped(value), [value])
  const take = () => {
    if (typed.trim() !== value) onChange(typed.trim())
  }
  const onKeyDown = (event: KeyboardEvent<HTMLInputElement>) => {
    if (event.key === 'Enter') take()
    if (event.key === 'Escape') {
      setTyped(value)
      event.currentTarget.blur()
    }
  }
  return (
    <Field label="unit" layout="inline">
      <TextInput
        ref={inputRef}
        value={typed}
        placeholder="any"
        maxLength={limits.serialMax}
        className={`w-36! ${value === '' ? '' : inForce}`}
        onChange={(event) => setTyped(event.target.value)}
        onBlur={take}
        onKeyDown={onKeyDown}
      />
    </Field>
  )
}

import type { Ref } from 'react'
import { Button } from '../../ui/button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { verdictWord } from '../../ui/verdict.tsx'
import { ChoiceFilter, type ChoiceOption, TextFilter } from './filter-fields.tsx'
import {
  attemptChoices,
  type FilterName,
  type Filters,
  isFilterValue,
  kindChoices,
  verdictChoices,
} from './filters.ts'
import { kindWord } from './words.ts'

/** What the lists of choices hold, as far as it has been read. */
export type FilterChoices = {
  designs: readonly string[]
  stations: readonly ChoiceOption[]
  recorders: readonly ChoiceOption[]
}

/** A row of filters that reads as a sentence; the ones in force are underlined in ink. */
export function FilterRow({
  filters,
  choices,
  onChange,
  onClear,
  unitRef,
}: {
  filters: Filters
  choices: FilterChoices
  onChange: (change: Filters) => void
  onClear: () => void
  unitRef: Ref<HTMLInputElement>
}) {
  const count = Object.keys(filters).length
  const given = (name: FilterName) => filters[name] ?? ''
  const set = (name: FilterName) => (value: string) => onChange({ [name]: value })
  return (
    <form
      aria-label="Filters"
      onSubmit={(event) => event.preventDefault()}
      className="flex flex-wrap items-baseline gap-x-4 gap-y-1.5 py-2 print:hidden"
    >
      <UnitFilter filters={filters} onChange={onChange} inputRef={unitRef} />
      <TextFilter
        label="lot"
        value={given('lot').replaceAll(',', ', ')}
        width="w-28!"
        isValid={(text) => isFilterValue('lot', tight(text))}
        wrong="Lots with commas between, such as 2409, 2417."
        onChange={(text) => onChange({ lot: tight(text) })}
      />
      <ChoiceFilter
        label="design"
        value={given('design')}
        choices={choices.designs.map((key) => [key, key])}
        onChange={set('design')}
      />
      {filters.design && !filters.design.includes(',') ? (
        <TextFilter
          label="revision"
          value={given('revision')}
          width="w-12!"
          isValid={(text) => isFilterValue('revision', text)}
          wrong="A whole number."
          onChange={set('revision')}
        />
      ) : null}
      <ChoiceFilter
        label="kind"
        value={given('kind')}
        choices={kindChoices.map((kind) => [kind, kindWord({ kind, pass: 1 })])}
        onChange={set('kind')}
      />
      <ChoiceFilter
        label="station"
        value={given('station')}
        choices={choices.stations}
        onChange={set('station')}
      />
      <ChoiceFilter
        label="by"
        none="anyone"
        value={given('by')}
        choices={choices.recorders}
        onChange={set('by')}
      />
      <ChoiceFilter
        label="verdict"
        value={given('verdict')}
        choices={verdictChoices.map((verdict) => [verdict, verdictWord(verdict)])}
        onChange={set('verdict')}
      />
      <ChoiceFilter
        label="attempt"
        value={given('attempt')}
        choices={attemptChoices.map((least) => [least, `${least} or more`])}
        onChange={set('attempt')}
      />
      <ChoiceFilter
        label="finding"
        value={given('finding')}
        choices={findingChoices}
        onChange={set('finding')}
      />
      <DayFilter label="from" none="the first" value={given('from')} onChange={set('from')} />
      <DayFilter label="to" none="now" value={given('to')} onChange={set('to')} />
      {count > 0 ? (
        <Button look="quiet" className="text-small" onClick={onClear}>
          {count === 1 ? 'clear the filter' : `clear ${count} filters`}
        </Button>
      ) : null}
      <FilterKeys />
    </form>
  )
}

/** What is typed is looked for at the beginning of serials and their parts; a whole serial comes by link. */
function UnitFilter({
  filters,
  onChange,
  inputRef,
}: {
  filters: Filters
  onChange: (change: Filters) => void
  inputRef: Ref<HTMLInputElement>
}) {
  return (
    <TextFilter
      label="unit"
      value={filters.unit ?? filters.serial ?? ''}
      width="w-28!"
      isValid={(text) => isFilterValue('serial', text)}
      wrong="At most 64 characters."
      onChange={(serial) => onChange({ serial, unit: '' })}
      inputRef={inputRef}
    />
  )
}

const findingChoices: readonly ChoiceOption[] = [
  ['open', 'open'],
  ['any', 'open or closed'],
]

/** Written as the address has it: 2026-11-24, or with a time. */
function DayFilter(props: {
  label: 'from' | 'to'
  none: string
  value: string
  onChange: (value: string) => void
}) {
  return (
    <TextFilter
      {...props}
      width="w-24!"
      isValid={(text) => isFilterValue(props.label, text)}
      wrong="A day, UTC, such as 2026-11-24."
    />
  )
}

const tight = (text: string) =>
  text
    .split(',')
    .map((part) => part.trim())
    .filter((part) => part !== '')
    .join(',')

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

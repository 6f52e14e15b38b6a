import { type ReactNode, type Ref, useState } from 'react'
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

type Props = {
  filters: Filters
  choices: FilterChoices
  onChange: (change: Filters) => void
}
type Given = (name: FilterName) => string
type Set = (name: FilterName) => (value: string) => void

/** A row of filters that reads as a sentence; the ones in force are underlined in ink. */
export function FilterRow(props: Props & { onClear: () => void; unitRef: Ref<HTMLInputElement> }) {
  const { filters, choices, onChange, onClear, unitRef } = props
  const [isWhole, setWhole] = useState(false)
  const count = Object.keys(filters).length
  const given: Given = (name) => filters[name] ?? ''
  const set: Set = (name) => (value) => onChange({ [name]: value })
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
      <OfRecording given={given} set={set} choices={choices} isWhole={isWhole} />
      <OfResult given={given} set={set} isWhole={isWhole} />
      {isWhole ? null : (
        <Button look="quiet" className="text-small medium:hidden" onClick={() => setWhole(true)}>
          more filters
        </Button>
      )}
      {count > 0 ? (
        <Button look="quiet" className="text-small" onClick={onClear}>
          {count === 1 ? 'clear the filter' : `clear ${count} filters`}
        </Button>
      ) : null}
      <FilterKeys />
    </form>
  )
}

/** On a phone the filters that are seldom used wait behind a button, but for one in force. */
function Seldom({ isShown, children }: { isShown: boolean; children: ReactNode }) {
  return <span className={isShown ? 'contents' : 'hidden medium:contents'}>{children}</span>
}

type PartProps = { given: Given; set: Set; isWhole: boolean }

function OfRecording({ given, set, isWhole, choices }: PartProps & { choices: FilterChoices }) {
  const design = given('design')
  return (
    <>
      <Seldom isShown={isWhole || design !== ''}>
        <ChoiceFilter
          label="design"
          value={design}
          choices={choices.designs.map((key) => [key, key])}
          onChange={set('design')}
        />
      </Seldom>
      {design !== '' && !design.includes(',') ? (
        <TextFilter
          label="revision"
          value={given('revision')}
          width="w-12!"
          isValid={(text) => isFilterValue('revision', text)}
          wrong="A whole number."
          onChange={set('revision')}
        />
      ) : null}
      <Seldom isShown={isWhole || given('kind') !== ''}>
        <ChoiceFilter
          label="kind"
          value={given('kind')}
          choices={kindChoices.map((kind) => [kind, kindWord({ kind, pass: 1 })])}
          onChange={set('kind')}
        />
      </Seldom>
      <Seldom isShown={isWhole || given('station') !== ''}>
        <ChoiceFilter
          label="station"
          value={given('station')}
          choices={choices.stations}
          onChange={set('station')}
        />
      </Seldom>
      <Seldom isShown={isWhole || given('by') !== ''}>
        <ChoiceFilter
          label="by"
          none="anyone"
          value={given('by')}
          choices={choices.recorders}
          onChange={set('by')}
        />
      </Seldom>
    </>
  )
}

function OfResult({ given, set, isWhole }: PartProps) {
  return (
    <>
      <ChoiceFilter
        label="verdict"
        value={given('verdict')}
        choices={verdictChoices.map((verdict) => [verdict, verdictWord(verdict)])}
        onChange={set('verdict')}
      />
      <Seldom isShown={isWhole || given('attempt') !== ''}>
        <ChoiceFilter
          label="attempt"
          value={given('attempt')}
          choices={attemptChoices.map((least) => [least, `${least} or more`])}
          onChange={set('attempt')}
        />
      </Seldom>
      <Seldom isShown={isWhole || given('finding') !== ''}>
        <ChoiceFilter
          label="finding"
          value={given('finding')}
          choices={findingChoices}
          onChange={set('finding')}
        />
      </Seldom>
      <span className="flex flex-wrap gap-x-4 gap-y-1.5">
        <DayFilter label="from" none="the first" value={given('from')} onChange={set('from')} />
        <Seldom isShown={isWhole || given('to') !== ''}>
          <DayFilter label="to" none="now" value={given('to')} onChange={set('to')} />
        </Seldom>
      </span>
    </>
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

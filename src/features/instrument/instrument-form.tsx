import { type FormEvent, type ReactNode, useState } from 'react'
import type { Instrument } from '../../../shared/contract/instruments.ts'
import { limits } from '../../../shared/limits.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { fieldMessage, Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { type Entry, emptyEntry, entryOf, readEntry } from './instrument-entry.ts'
import { useSaveInstrument } from './queries.ts'

type FormProps = { instrument: Instrument | null; onDone: () => void; cancel?: ReactNode }

/** Adds an instrument, or changes one; its short name is for ever, because records name it. */
export function InstrumentForm({ instrument, onDone, cancel }: FormProps) {
  const [entry, setEntry] = useState<Entry>(() => (instrument ? entryOf(instrument) : emptyEntry))
  const [tried, setTried] = useState(false)
  const save = useSaveInstrument(instrument)
  const { facts, trouble } = readEntry(entry)
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (facts === null || save.isPending) return
    save.mutate(facts, {
      onSuccess: () => {
        announce(instrument ? `${facts.id} is changed.` : `Instrument ${facts.id} is added.`)
        setEntry(emptyEntry)
        setTried(false)
        onDone()
      },
    })
  }
  const line = (name: keyof Entry, label: string, more: LineMore = {}) => (
    <Field
      label={label}
      layout="row"
      hint={more.hint}
      error={(tried ? trouble[name] : undefined) ?? fieldMessage(save.error, `/${name}`)}
    >
      <TextInput
        value={entry[name]}
        maxLength={more.max ?? 32}
        {...(more.isFirst ? { 'data-first': true } : {})}
        className={more.isShort ? 'w-32!' : ''}
        onChange={(event) => setEntry({ ...entry, [name]: event.target.value })}
      />
    </Field>
  )
  return (
    <form onSubmit={submit} noValidate className="max-w-[34rem] space-y-3">
      {instrument
        ? null
        : line('id', 'Short name', {
            max: limits.instrumentIdMax,
            hint: 'As records and scripts name it: DMM-07.',
          })}
      {line('title', 'What it is', { max: limits.instrumentTitleMax, isFirst: instrument !== null })}
      {line('serial', 'Serial', { max: limits.serialMax })}
      {line('gainPpm', 'Gain limit', { isShort: true, hint: 'Of reading: 3 ppm or 0.0003 %.' })}
      {line('offsetV', 'Offset limit', { isShort: true, hint: 'Such as 2 uV.' })}
      {line('calibratedOn', 'Calibrated on', { isShort: true, hint: 'A day, as 2026-03-02.' })}
      {line('dueOn', 'Due on', { isShort: true, hint: 'The last day on which it may be used, UTC.' })}
      <Problem error={save.error} />
      <div className="flex gap-3">
        <Button look={instrument ? 'primary' : 'plain'} type="submit" disabled={save.isPending}>
          {instrument ? `Save ${instrument.id}` : 'Add the instrument'}
        </Button>
        {cancel}
      </div>
    </form>
  )
}

type LineMore = { hint?: string; max?: number; isShort?: boolean; isFirst?: boolean }

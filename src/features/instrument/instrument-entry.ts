import { type Instrument, type InstrumentFacts, newInstrument } from '../../../shared/contract/instruments.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { needsArithmetic, parseQuantity } from '../../../shared/quantity/parse.ts'
import { exact } from '../../ui/number-format.ts'

/** The form as typed. */
export type Entry = { [Name in keyof InstrumentFacts]: string }
export type EntryTrouble = { [Name in keyof InstrumentFacts]?: string }

export const emptyEntry: Entry = {
  id: '',
  serial: '',
  title: '',
  gainPpm: '',
  offsetV: '',
  calibratedOn: '',
  dueOn: '',
}

export function entryOf({ id, serial, title, gainPpm, offsetV, calibratedOn, dueOn }: Instrument): Entry {
  const limits = { gainPpm: exact(gainPpm, 'ppm'), offsetV: exact(offsetV, 'V') }
  return { id, serial, title, ...limits, calibratedOn, dueOn }
}

const quantities = {
  gainPpm: { label: 'Gain limit', unit: 'ppm' },
  offsetV: { label: 'Offset limit', unit: 'V' },
} as const

/** What was typed, by the contract's own rules; or one sentence a field. */
export function readEntry(entry: Entry): { facts: InstrumentFacts | null; trouble: EntryTrouble } {
  const trouble: EntryTrouble = {}
  const values: { [name: string]: unknown } = { ...entry }
  for (const name of ['gainPpm', 'offsetV'] as const) {
    try {
      const read = parseQuantity(entry[name], quantities[name])
      if (read === needsArithmetic) trouble[name] = 'Type the result: arithmetic is not taken here.'
      else values[name] = read.value
    } catch (error) {
      if (!isOgeeError(error)) throw error
      trouble[name] = error.message
    }
  }
  const checked = newInstrument.safeParse(values)
  for (const { path, message } of checked.error?.issues ?? []) {
    const name = path[0] as keyof Entry
    const isMissing = entry[name]?.trim() === ''
    trouble[name] ??= isMissing ? `${missing[name]} is missing.` : message
  }
  return { facts: Object.keys(trouble).length === 0 ? (checked.data ?? null) : null, trouble }
}

const missing: { [Name in keyof Entry]: string } = {
  id: 'Short name',
  serial: 'Serial',
  title: 'What it is',
  gainPpm: 'Gain limit',
  offsetV: 'Offset limit',
  calibratedOn: 'Calibrated on',
  dueOn: 'Due on',
}

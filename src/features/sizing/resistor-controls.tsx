import { useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import type { Field as QuantityField } from '../../../shared/quantity/field.ts'
import { needsArithmetic, parseQuantity } from '../../../shared/quantity/parse.ts'
import { allSeries } from '../../../shared/solver/network-synthesis/series.ts'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'
import { exact } from '../../ui/number-format.ts'
import type { ResistorSettings } from './resistor-request.ts'

type ResistorControlsProps = {
  settings: ResistorSettings
  onSettings: (settings: ResistorSettings) => void
  /** Which network, for speech. */
  name: string
}

/** Series, tolerance and limits; a limit left empty does not bind. */
export function ResistorControls({ settings, onSettings, name }: ResistorControlsProps) {
  const change = (part: Partial<ResistorSettings>) => onSettings({ ...settings, ...part })
  const { series, tolerance, maxSourceOhm, maxCurrentA } = settings
  return (
    <fieldset className="mb-1 flex flex-wrap items-start gap-x-4 gap-y-1 print:hidden">
      <legend className="sr-only">Resistors of the {name} network</legend>
      <Field label="series" layout="inline">
        <Select
          value={series}
          onChange={({ target }) =>
            change({ series: allSeries.find((one) => one === target.value) ?? series })
          }
        >
          {allSeries.map((one) => (
            <option key={one}>{one}</option>
          ))}
        </Select>
      </Field>
      <Setting
        label="tolerance"
        unit="%"
        value={tolerance * 100}
        onValue={(percent) => change({ tolerance: (percent ?? 0) / 100 })}
      />
      <Setting
        label="source under"
        unit="ohm"
        value={maxSourceOhm}
        onValue={(ohm) => change({ maxSourceOhm: ohm })}
      />
      <Setting
        label="DAC load under"
        unit="A"
        value={maxCurrentA}
        onValue={(ampere) => change({ maxCurrentA: ampere })}
      />
    </fieldset>
  )
}

type SettingProps = {
  label: string
  unit: string
  value: number | null
  onValue: (value: number | null) => void
}

/** Keeps what is typed as typed; an unreadable text says so and leaves the value alone. */
function Setting({ label, unit, value, onValue }: SettingProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const [error, setError] = useState<string | null>(null)
  const take = (text: string) => {
    setTyped(text)
    const read = readSetting(text, { label, unit })
    setError(typeof read === 'string' ? read : null)
    if (typeof read !== 'string') onValue(read)
  }
  return (
    <Field label={label} layout="inline" error={error}>
      <TextInput
        value={
          typed ?? (value === null ? '' : exact(Number(value.toPrecision(12)), unit === 'ohm' ? 'Ω' : unit))
        }
        placeholder="no limit"
        className="!w-24"
        onChange={({ target }) => take(target.value)}
        onBlur={() => {
          if (error === null) setTyped(null)
        }}
      />
    </Field>
  )
}

/** The value, null for an empty field, or the sentence that says what is wrong. */
function readSetting(text: string, field: QuantityField): number | null | string {
  if (text.trim() === '') return null
  try {
    const read = parseQuantity(text, field)
    return read === needsArithmetic ? `${field.label} takes one number with its unit.` : read.value
  } catch (error) {
    if (isOgeeError(error)) return error.message
    throw error
  }
}

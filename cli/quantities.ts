import { pointFields } from '../shared/quantity/field.ts'
import { engineering, fixed } from '../shared/quantity/format.ts'
import { parseQuantityAsync } from '../shared/quantity/parse.ts'
import { loadArithmetic } from './arithmetic.ts'

/** Numbers for a terminal. The minus stays ASCII: what is copied from a terminal is typed in somewhere. */
export const ascii = (text: string) => text.replaceAll('\u2212', '-')
/** Resistances and currents: 8.66 kohm. */
export const prefixed = (value: number, unit: 'ohm' | 'A') => ascii(engineering(value, unit))

export const volts = (value: number, digits = 3) =>
  value === 0 ? '0 V' : ascii(engineering(value, 'V', { digits }))
export const ppm = (value: number) => `${decimals(value, 1)} ppm`
/** An uncertainty: two digits, however small. */
export const plusMinusPpm = (value: number) => `± ${engineering(value, 'ppm', { digits: 2 })}`
export const plusMinusVolts = (value: number) => `± ${engineering(value, 'V', { digits: 2 })}`
export const lsb = (value: number) => `${decimals(value, 3)} LSB`
export const percent = (ratio: number) => `${decimals(ratio * 100, 1)} %`
export const decimals = (value: number, places: number) => ascii(fixed(value, places))

/** Degrees Celsius as typed: 23.4, or with its unit. */
export async function celsius(text: string): Promise<number> {
  return (await parseQuantityAsync(text, pointFields.temperature, loadArithmetic)).value
}

import { copyText } from '../../../shared/quantity/format.ts'

/** Stored numbers as texts that read back to the same double. */

export const voltText = (value: number): string => copyText(value, 'V')
export const ohmText = (value: number): string => copyText(value, 'ohm')
/** As engineers write resistors: 8.66k, 1M, 470. */
export const ohmShort = (value: number): string =>
  ohmText(value)
    .replace(/ ([kM])ohm$/, '$1')
    .replace(/ ohm$/, '')

/** value·10^places by moving the point in the shortest decimal, so that no digit changes. */
export function scaled(value: number, places: number): string {
  if (value === 0) return '0'
  const [mantissa = '', old] = value.toExponential().split('e')
  const exponent = Number(old) + places
  if (exponent > 14 || exponent < -6) return `${mantissa}e${exponent}`
  const sign = mantissa.startsWith('-') ? '-' : ''
  const digits = mantissa.replace(/[-.]/g, '')
  if (exponent < 0) return `${sign}0.${'0'.repeat(-exponent - 1)}${digits}`
  const whole = digits.slice(0, exponent + 1).padEnd(exponent + 1, '0')
  const part = digits.slice(exponent + 1)
  return `${sign}${whole}${part === '' ? '' : `.${part}`}`
}

export const percentText = (fraction: number): string => `${scaled(fraction, 2)} %`
export const endsText = (lowV: number, highV: number): string => `${voltText(lowV)} to ${voltText(highV)}`

/** A change per volt with an exponent of three: 2.08e-3 /V. */
export function perVoltText(value: number, unit: string): string {
  if (value === 0) return '0'
  const exponent = Math.floor(Number(value.toExponential().split('e')[1]) / 3) * 3
  const power = exponent === 0 ? '' : `e${exponent}`
  return `${scaled(value, -exponent)}${power} ${unit}`
}

export const limitText = ({ value, unit }: { value: number; unit: 'LSB' | 'ppm' | 'V' }): string =>
  unit === 'V' ? voltText(value) : `${value} ${unit}`

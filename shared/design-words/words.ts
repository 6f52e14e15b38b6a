import { engineering, fixed } from '../quantity/format.ts'
import type { Which } from '../solver/types.ts'

/** Small words that sentences about a design share. Screen text: SI prefixes, minus U+2212. */

export const volts = (value: number): string => engineering(value, 'V')
export const ohms = (value: number): string => engineering(value, 'Ω')
export const bitsWord = (bits: number): string => (bits === 1 ? '1 bit' : `${bits} bits`)
/** A part of a bit is no plural: 0.33 bit, 1.00 bit, 1.68 bits. */
export const bitsAmount = (bits: number): string =>
  `${fixed(bits, 2)} ${Math.abs(Number(bits.toFixed(2))) > 1 ? 'bits' : 'bit'}`
export const nameOf = (which: Which): string => (which === 'gain' ? 'Gain' : 'Offset')

/** A span as people write it: ±367 mV when both ends are alike to three digits, else both ends. */
export function span(lowV: number, highV: number): string {
  const low = volts(-lowV)
  return low === volts(highV) && highV > 0 ? `±${low}` : `${volts(lowV)} to ${volts(highV)}`
}

/** Two to three significant digits and no false ones: 5.11 times is "5.1 times", 532 stays. */
export function times(ratio: number): string {
  return ratio >= 100 ? fixed(ratio, 0) : ratio >= 10 ? fixed(ratio, 0) : trimZero(fixed(ratio, 1))
}

const trimZero = (text: string): string => (text.endsWith('.0') ? text.slice(0, -2) : text)

/** Past the need in percent while that reads well, then in times. */
export function past(reachMargin: number): string {
  return reachMargin < 2 ? `${fixed(reachMargin * 100, 0)} % past` : `${times(reachMargin + 1)} times`
}

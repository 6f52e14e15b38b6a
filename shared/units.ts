/**
 * Branded quantities, and the only conversions between ways of stating an error. A brand costs nothing at run time; it
 * keeps volts, ppm and LSB from being mixed up where all are plain numbers.
 */
declare const brand: unique symbol
type Branded<Name extends string> = number & { readonly [brand]: Name }

export type Volt = Branded<'V'>
export type Ppm = Branded<'ppm'>
export type Lsb = Branded<'LSB'>
export type Ratio = Branded<'ratio'>
export type Ohm = Branded<'ohm'>
export type Celsius = Branded<'degC'>

export const volt = (value: number): Volt => value as Volt
export const ppm = (value: number): Ppm => value as Ppm
export const lsb = (value: number): Lsb => value as Lsb
export const ratio = (value: number): Ratio => value as Ratio
export const ohm = (value: number): Ohm => value as Ohm
export const celsius = (value: number): Celsius => value as Celsius

/** Size of a range: full-scale range and one LSB, in volts. */
export type Scale = { fsrV: number; lsbV: number }
export type ErrorUnit = 'LSB' | 'ppm' | 'V'

/** 350 ppm as a ratio: 0.00035. */
export const ratioOfPpm = (value: Ppm): Ratio => ratio(value / 1e6)
export const ppmOfRatio = (value: Ratio): Ppm => ppm(value * 1e6)
export const lsbOfVolts = (value: Volt, { lsbV }: Scale): Lsb => lsb(value / lsbV)
export const voltsOfLsb = (value: Lsb, { lsbV }: Scale): Volt => volt(value * lsbV)
/** ppm of FSR. */
export const ppmOfVolts = (value: Volt, { fsrV }: Scale): Ppm => ppm((value / fsrV) * 1e6)
export const voltsOfPpm = (value: Ppm, { fsrV }: Scale): Volt => volt((value * fsrV) / 1e6)

/** An error in volts, in the unit that a screen shows. */
export function errorIn(unit: ErrorUnit, value: Volt, scale: Scale): number {
  if (unit === 'LSB') return lsbOfVolts(value, scale)
  return unit === 'ppm' ? ppmOfVolts(value, scale) : value
}

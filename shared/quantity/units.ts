/** Units that people type, each a kind and a power of ten of that kind's base: exact, because only exponents move. */
export type Kind =
  | 'voltage'
  | 'resistance'
  | 'current'
  | 'ratio'
  | 'lsb'
  | 'temperature'
  | 'temperature-difference'
  | 'per-volt'
  | 'per-kelvin'
  | 'volt-per-volt'
  | 'bits'
  | 'number'

export type Unit = { kind: Kind; exponent: number }

/** What a quantity of a kind is called, and the units that a field of that kind takes. */
export const kinds: Readonly<Record<Kind, { name: string; takes: string; example: string }>> = {
  voltage: { name: 'a voltage', takes: 'V, mV or uV', example: '96 mV' },
  resistance: { name: 'a resistance', takes: 'ohm, kohm or Mohm', example: '4.7 kohm' },
  current: { name: 'a current', takes: 'A, mA or uA', example: '500 uA' },
  ratio: { name: 'a ratio', takes: 'ppm or %', example: '120 ppm' },
  lsb: { name: 'a number of LSB', takes: 'LSB', example: '0.5 LSB' },
  temperature: { name: 'a temperature', takes: '°C', example: '23.4 °C' },
  'temperature-difference': { name: 'a temperature difference', takes: 'K', example: '20 K' },
  'per-volt': { name: 'a change per volt', takes: '/V or ppm/V', example: '2.08e-3 /V' },
  'per-kelvin': { name: 'a change per kelvin', takes: 'ppm/K', example: '2 ppm/K' },
  'volt-per-volt': { name: 'volts per volt', takes: 'V/V or mV/V', example: '-0.01 V/V' },
  bits: { name: 'a number of bits', takes: 'bits', example: '12 bits' },
  number: { name: 'a plain number', takes: 'no unit', example: '0.25' },
}

const prefixes: Readonly<Record<string, number>> = { p: -12, n: -9, u: -6, m: -3, '': 0, k: 3, M: 6, G: 9 }
const ratios: Readonly<Record<string, number>> = { '%': -2, '‰': -3, ppm: -6, ppb: -9 }
const bases: readonly [RegExp, Kind][] = [
  [/^([pnumkMG]?)V$/, 'voltage'],
  [/^([pnumkMG]?)(?:ohms?|Ohms?)$/, 'resistance'],
  [/^([pnumkMG]?)A$/, 'current'],
  [/^([m]?)K$/, 'temperature-difference'],
]
const plain: Readonly<Record<string, Unit>> = {
  LSB: { kind: 'lsb', exponent: 0 },
  lsb: { kind: 'lsb', exponent: 0 },
  '°C': { kind: 'temperature', exponent: 0 },
  degC: { kind: 'temperature', exponent: 0 },
  bit: { kind: 'bits', exponent: 0 },
  bits: { kind: 'bits', exponent: 0 },
  R: { kind: 'resistance', exponent: 0 },
}

/** One spelling for signs that look alike: µ and μ are u, Ω and the ohm sign are ohm, ℃ is °C, − is -. */
export function oneSpelling(text: string): string {
  return text
    .replace(/[\u00b5\u03bc]/g, 'u')
    .replace(/[\u03a9\u2126]/g, 'ohm')
    .replace(/\u2103/g, '°C')
    .replace(/\u2212/g, '-')
}

/**
 * A unit as typed (already in one spelling), or null when it is none. m and M differ. A bare SI prefix is a
 * resistance (`4.7k`) and is read only where a resistance is asked for.
 * @example unitOf('kohm') // { kind: 'resistance', exponent: 3 }
 */
export function unitOf(text: string, barePrefix = false): Unit | null {
  const unit = text.replace(/\s*\/\s*/g, '/').replace(/\s*(?:of\s+)?FSR$/, '')
  if (unit === '') return null
  if (barePrefix && /^[mkMG]$/.test(unit)) return { kind: 'resistance', exponent: prefixes[unit]! }
  const slash = unit.indexOf('/')
  if (slash >= 0) return perUnit(unit.slice(0, slash), unit.slice(slash + 1))
  return simpleUnit(unit)
}

function simpleUnit(unit: string): Unit | null {
  if (Object.hasOwn(ratios, unit)) return { kind: 'ratio', exponent: ratios[unit]! }
  if (Object.hasOwn(plain, unit)) return plain[unit]!
  for (const [pattern, kind] of bases) {
    const match = pattern.exec(unit)
    if (match) return { kind, exponent: prefixes[match[1]!]! }
  }
  return null
}

function perUnit(over: string, under: string): Unit | null {
  const top: Unit | null = over === '' || over === '1' ? { kind: 'ratio', exponent: 0 } : simpleUnit(over)
  const bottom = simpleUnit(under)
  if (top === null || bottom === null) return null
  const exponent = top.exponent - bottom.exponent
  if (bottom.kind === 'voltage') {
    if (top.kind === 'ratio') return { kind: 'per-volt', exponent }
    return top.kind === 'voltage' ? { kind: 'volt-per-volt', exponent } : null
  }
  const perKelvin = bottom.kind === 'temperature-difference' || bottom.kind === 'temperature'
  return perKelvin && top.kind === 'ratio' ? { kind: 'per-kelvin', exponent } : null
}

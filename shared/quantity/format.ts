/** Numbers for screens (design tokens, "Numbers"), and for copying: ASCII that reads back to the same double. */
const MINUS = '\u2212'
const symbols: Readonly<Record<number, string>> = {
  [-12]: 'p',
  [-9]: 'n',
  [-6]: 'µ',
  [-3]: 'm',
  0: '',
  3: 'k',
  6: 'M',
}
const LOWEST = -12
const HIGHEST = 6

export type FormatOptions = {
  /** Significant digits; 3 in sentences and ladders. */
  digits?: number
  /** `+` for signed errors; never for sizes. */
  plus?: boolean
}

/** Units that take no SI prefix. */
function takesPrefix(unit: string): boolean {
  return unit === 'V' || unit === 'A' || unit === 'Ω' || unit === 'ohm'
}

/**
 * Engineering notation for a screen: mantissa 1 to 999.99, prefix p n µ m (none) k M, minus U+2212. ppm, LSB, % and
 * others without a prefix.
 * @param value finite, in the unit
 * @example engineering(1.907e-5, 'V') // '19.1 µV'
 */
export function engineering(value: number, unit: string, options: FormatOptions = {}): string {
  const digits = options.digits ?? 3
  if (!takesPrefix(unit)) return joined(rounded(value, digits), value, unit, options)
  const exponent = engineeringExponent(value, digits)
  const text = rounded(shiftedDecimal(value, -exponent), digits)
  return joined(text, value, `${symbols[exponent]}${unit}`, options)
}

/** The engineering exponent (…, -6, -3, 0, 3, …) of a value after rounding to that many digits. */
export function engineeringExponent(value: number, digits = 3): number {
  if (value === 0) return 0
  const decimal = Number(
    Math.abs(value)
      .toExponential(digits - 1)
      .split('e')[1],
  )
  const exponent = Math.floor(decimal / 3) * 3
  return Math.min(Math.max(exponent, LOWEST), HIGHEST)
}

/**
 * A number with fixed decimals for a table column, minus U+2212; zero after rounding has no sign.
 * @example fixed(-0.0004, 3) // '0.000'
 */
export function fixed(value: number, decimals: number, plus = false): string {
  const text = Math.abs(value).toFixed(decimals)
  const zero = !/[1-9]/.test(text)
  return zero ? text : `${value < 0 ? MINUS : plus ? '+' : ''}${text}`
}

/** The SI prefix of an engineering exponent: µ for -6. */
export function prefixSymbol(exponent: number): string {
  return symbols[exponent] ?? ''
}

/** |value| with that many significant digits, without an exponent. */
function rounded(value: number, digits: number): string {
  const size = Math.abs(value)
  if (size === 0) return (0).toFixed(Math.max(0, digits - 1))
  const decimal = Number(size.toExponential(digits - 1).split('e')[1])
  return size.toFixed(Math.min(100, Math.max(0, digits - 1 - decimal)))
}

function joined(text: string, value: number, unit: string, options: FormatOptions): string {
  const zero = !/[1-9]/.test(text)
  const sign = zero ? '' : value < 0 ? MINUS : options.plus ? '+' : ''
  return unit === '' ? `${sign}${text}` : `${sign}${text} ${unit}`
}

/** The double nearest to value·10^exponent as written in shortest decimal: moves the exponent in the text. */
function shiftedDecimal(value: number, exponent: number): number {
  const [mantissa, old] = value.toExponential().split('e')
  return Number(`${mantissa}e${Number(old) + exponent}`)
}

/**
 * For copying: ASCII, every digit, engineering prefix where the unit takes one; `parseQuantity` reads it back to the
 * same double.
 * @example copyText(1.9073486328125e-5, 'V') // '19.073486328125 uV'
 */
export function copyText(value: number, unit: string): string {
  const ascii = unit === 'Ω' ? 'ohm' : unit.replace('°C', 'degC')
  if (!takesPrefix(unit) || value === 0) return ascii === '' ? String(value) : `${value} ${ascii}`
  const [mantissa, old] = value.toExponential().split('e')
  const decimal = Number(old)
  const exponent = Math.min(Math.max(Math.floor(decimal / 3) * 3, LOWEST), HIGHEST)
  const number = movePoint(mantissa!, decimal - exponent)
  const prefix = exponent === -6 ? 'u' : symbols[exponent]
  return `${number} ${prefix}${ascii}`
}

/** Moves the decimal point of a d.ddd mantissa by text, so that no digit changes. */
function movePoint(mantissa: string, places: number): string {
  const sign = mantissa.startsWith('-') ? '-' : ''
  const [whole, part = ''] = mantissa.slice(sign.length).split('.')
  const digits = `${whole}${part}`
  if (places < 0 || places > 15) return `${mantissa}e${places}`
  const padded = digits.padEnd(places + 1, '0')
  const tail = padded.slice(places + 1)
  return `${sign}${padded.slice(0, places + 1)}${tail === '' ? '' : `.${tail}`}`
}

/** How numbers are written on screen. Values come in SI units and are rounded here and nowhere before. */

export const minus = '\u2212'

/** Digits of a text in pieces; `gap` marks the digit after which a group ends. Minus signs become true ones. */
export function groupDigits(text: string): { text: string; gap: boolean }[] {
  const pieces: { text: string; gap: boolean }[] = []
  let plain = ''
  const parts = /^([^\d]*)(\d+)(?:\.(\d+))?(.*)$/s.exec(text)
  if (!parts) return [{ text: text.replace('-', minus), gap: false }]
  const [, before = '', whole = '', fraction, after = ''] = parts
  const grouped = whole.length >= 5 || (fraction ?? '').length >= 5
  const put = (digit: string, gap: boolean) => {
    if (!gap) {
      plain += digit
      return
    }
    if (plain !== '') pieces.push({ text: plain, gap: false })
    plain = ''
    pieces.push({ text: digit, gap: true })
  }
  plain = before.replace('-', minus)
  for (let i = 0; i < whole.length; i++) {
    const left = whole.length - 1 - i
    put(whole.charAt(i), grouped && whole.length > 3 && left > 0 && left % 3 === 0)
  }
  if (fraction !== undefined) {
    plain += '.'
    for (let i = 0; i < fraction.length; i++) {
      const last = i === fraction.length - 1
      put(fraction.charAt(i), grouped && fraction.length > 3 && !last && (i + 1) % 3 === 0)
    }
  }
  plain += after.replace(/e-/, `e${minus}`)
  if (plain !== '') pieces.push({ text: plain, gap: false })
  return pieces
}

export type Sign = 'auto' | 'always'

/** A fixed number of decimals. Zero after rounding has no sign; `always` puts a plus before signed errors. */
export function fixed(value: number, decimals: number, sign: Sign = 'auto'): string {
  const text = Math.abs(value).toFixed(decimals)
  if (Number(text) === 0) return text
  if (value < 0) return `${minus}${text}`
  return sign === 'always' ? `+${text}` : text
}

const prefixes = [
  { factor: 1e-12, prefix: 'p' },
  { factor: 1e-9, prefix: 'n' },
  { factor: 1e-6, prefix: 'µ' },
  { factor: 1e-3, prefix: 'm' },
  { factor: 1, prefix: '' },
  { factor: 1e3, prefix: 'k' },
  { factor: 1e6, prefix: 'M' },
] as const

/** Units that take no prefix. */
const bare = new Set(['ppm', 'LSB', '%', '°C', 'K', 'ppm/K', '1/V', '/V', 'V/V'])

/** Mantissa from 1 to 999.99 and a prefix: 0.0000191 V with 3 digits is 19.1 µV. */
export function engineering(value: number, unit: string, digits = 3, sign: Sign = 'auto'): string {
  if (value === 0) return `0 ${unit}`
  const size = Math.abs(value)
  if (bare.has(unit)) return `${signOf(value, sign)}${significant(size, digits)} ${unit}`
  let chosen: { factor: number; prefix: string } = prefixes[0]
  for (const step of prefixes) {
    // Rounding may carry to 1000; then the next prefix is the right one.
    if (Number((size / step.factor).toPrecision(digits)) >= 1) chosen = step
  }
  return `${signOf(value, sign)}${significant(size / chosen.factor, digits)} ${chosen.prefix}${unit}`
}

function signOf(value: number, sign: Sign): string {
  if (value < 0) return minus
  return sign === 'always' ? '+' : ''
}

/** Significant digits without exponent for ordinary sizes. */
export function significant(size: number, digits: number): string {
  const text = size.toPrecision(digits)
  return text.includes('e') ? String(Number(text)) : text
}

/** A stored value in engineering notation with every digit that it has and no more: 8660 ohm is 8.66 kΩ. */
export function exact(value: number, unit: string): string {
  if (value === 0) return `0 ${unit}`
  const digits = Math.abs(value)
    .toExponential()
    .replace(/e.*$/, '')
    .replaceAll(/[^0-9]/g, '').length
  const text = engineering(value, unit, Math.max(1, Math.min(digits, 17)))
  return text.replace(/^(\S*\.\d*?)0+(?= )/, '$1').replace(/\.(?= )/, '')
}

const minus = '\u2212'
const thin = '\u2009'

/** Groups of three from the point, in parts of five digits or more (tokens.md, Numbers; SVG text has no letter spacing). */
function grouped(digits: string): string {
  return digits.length < 5 ? digits : digits.replace(/\B(?=(\d{3})+$)/g, thin)
}

/** A number with fixed decimals and a true minus; zero after rounding has no sign. */
export function numberText(value: number, decimals: number, signed = false): string {
  const size = Math.abs(value).toFixed(decimals)
  const isZero = Number(size) === 0
  const sign = isZero ? '' : value < 0 ? minus : signed ? '+' : ''
  const [whole = '0', part] = size.split('.')
  return `${sign}${grouped(whole)}${part === undefined ? '' : `.${part}`}`
}

export const codeText = (code: number): string => grouped(String(code))

/** Decimals that tell neighbouring ticks apart. */
export function decimalsFor(step: number): number {
  let decimals = 0
  let shown = Math.abs(step)
  while (decimals < 9 && Math.abs(shown - Math.round(shown)) > 1e-6 * shown) {
    shown *= 10
    decimals += 1
  }
  return decimals
}

/** Decimals for a value in a sentence or label: three significant digits, none over a hundred. */
export function labelDecimals(largestShown: number): number {
  if (largestShown >= 1000) return 1
  if (largestShown >= 10) return 1
  if (largestShown >= 0.1) return 2
  return 3
}

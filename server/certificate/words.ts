import { engineering, fixed } from '../../shared/quantity/format.ts'

const thin = '\u2009'

/** Groups of three from the point, in parts of five digits or more. */
export function grouped(text: string): string {
  const [whole = '', part] = text.split('.')
  const left = whole.replace(/\d{5,}/, (digits) => digits.replaceAll(/\B(?=(\d{3})+$)/g, thin))
  if (part === undefined) return left
  return `${left}.${part.length < 5 ? part : part.replaceAll(/(\d{3})(?=\d)/g, `$1${thin}`)}`
}

export const whole = (value: number) => grouped(String(value))
export const number = (value: number, decimals: number, plus = false) => grouped(fixed(value, decimals, plus))
export const quantity = (value: number, unit: string, digits = 3) => engineering(value, unit, { digits })

/** Times are UTC, which is said beside them. */
export const time = (instant: string) => new Date(instant).toISOString().slice(0, 19).replace('T', ' ')
export const day = (instant: string) => new Date(instant).toISOString().slice(0, 10)

const small = [
  'no',
  'one',
  'two',
  'three',
  'four',
  'five',
  'six',
  'seven',
  'eight',
  'nine',
  'ten',
  'eleven',
  'twelve',
]
export const countWord = (count: number) => small[count] ?? whole(count)

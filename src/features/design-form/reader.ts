import { isOgeeError, type OgeeError } from '../../../shared/errors.ts'
import type { Field } from '../../../shared/quantity/field.ts'
import { needsArithmetic, parseQuantity } from '../../../shared/quantity/parse.ts'

export type Read = { value: number; unit: string }
/** Result of arithmetic, which is loaded on first use: until then a field is pending. */
export type Arithmetic = (text: string, field: Field) => Read | OgeeError | 'pending'

/** Bounds that a field states itself, in words of its own. */
export type Rule = 'positive' | 'not-negative' | 'fraction'
export type Asked = Field & { optional?: boolean; rule?: Rule }

/** Reads fields one after the other and keeps what is wrong with each. */
export type Reader = {
  problems: Map<string, string>
  isPending: boolean
  arithmetic: Arithmetic
}

export const newReader = (arithmetic: Arithmetic): Reader => ({
  problems: new Map(),
  isPending: false,
  arithmetic,
})

/** The first thing that is wrong with a field is the one to say. */
export function wrong(reader: Reader, field: string, why: string): undefined {
  if (!reader.problems.has(field)) reader.problems.set(field, why)
  return undefined
}

/** A quantity with its unit; undefined when it is empty, in error or not yet there. */
export function readQuantity(reader: Reader, field: string, text: string, asked: Asked): Read | undefined {
  if (text.trim() === '') {
    return asked.optional ? undefined : wrong(reader, field, `${asked.label} is missing.`)
  }
  try {
    const parsed = parseQuantity(text, asked)
    const read = parsed === needsArithmetic ? reader.arithmetic(text, asked) : parsed
    if (read === 'pending') {
      reader.isPending = true
      return undefined
    }
    if (isOgeeError(read)) return wrong(reader, field, read.message)
    return ruled(reader, field, text, asked, { value: read.value, unit: read.unit })
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return wrong(reader, field, error.message)
  }
}

function ruled(reader: Reader, field: string, text: string, asked: Asked, read: Read): Read | undefined {
  const { value } = read
  const clean = text.trim()
  if (asked.rule === 'positive' && !(value > 0)) {
    return wrong(reader, field, `${asked.label} is ${clean}; it must be over 0.`)
  }
  if (asked.rule === 'not-negative' && !(value >= 0)) {
    return wrong(reader, field, `${asked.label} is ${clean}; it must be at least 0.`)
  }
  return read
}

export const readNumber = (reader: Reader, field: string, text: string, asked: Asked): number | undefined =>
  readQuantity(reader, field, text, asked)?.value

/** A whole number with bounds, its unit optional: "18 bits", "18". */
export function readWhole(
  reader: Reader,
  field: string,
  text: string,
  asked: Asked,
  [least, most]: readonly [number, number],
): number | undefined {
  const value = readNumber(reader, field, text, asked)
  if (value === undefined) return undefined
  if (Number.isInteger(value) && value >= least && value <= most) return value
  const unit = asked.unit === '' ? '' : ` ${asked.unit}`
  return wrong(reader, field, `${asked.label} takes a whole number from ${least} to ${most}${unit}.`)
}

/** A fraction typed in percent (a bare number too) or ppm, to the double nearest to what was typed. */
export function readFraction(reader: Reader, field: string, text: string, asked: Asked): number | undefined {
  const typed = /^\s*([+-]?(?:\d+\.?\d*|\.\d+))\s*(%|ppm)?\s*$/.exec(text.replace('\u2212', '-'))
  const value = typed
    ? Number(`${typed[1]}e${typed[2] === 'ppm' ? -6 : -2}`)
    : percentOf(readNumber(reader, field, text, { ...asked, unit: '%' }))
  if (value === undefined) return undefined
  if (!(value >= 0)) return wrong(reader, field, `${asked.label} is ${text.trim()}; it must be at least 0.`)
  if (asked.rule === 'fraction' && value >= 1) {
    return wrong(reader, field, `${asked.label} is ${text.trim()}; it must be under 100 %.`)
  }
  return value
}

const percentOf = (value: number | undefined): number | undefined =>
  value === undefined ? undefined : Number(`${value}e-2`)

/** Two ends: "0 V to 10 V", "±2.5 V". `none` stands for an end that is not stated, where that is allowed. */
export function readEnds(
  reader: Reader,
  field: string,
  text: string,
  asked: Asked & { open?: boolean },
): { low: number | undefined; high: number | undefined } | undefined {
  const clean = text.trim()
  if (clean === '') return asked.optional ? undefined : wrong(reader, field, `${asked.label} is missing.`)
  const both = /^(?:±|\+\/?-)\s*(.*)$/.exec(clean)
  if (both) {
    const half = readNumber(reader, field, both[1]!, asked)
    return half === undefined ? undefined : { low: half === 0 ? 0 : -half, high: half }
  }
  const parts = clean.split(/\s+to\s+|\s*\.\.\.?\s*|\s*…\s*/i)
  if (parts.length !== 2) {
    return wrong(reader, field, `${asked.label} takes two ends. Write it like -2.5 V to 2.5 V.`)
  }
  const end = (part: string): number | undefined =>
    asked.open && part === 'none' ? undefined : readNumber(reader, field, part, asked)
  return { low: end(parts[0]!), high: end(parts[1]!) }
}

/** Quantities between slashes: "8.66k / 1.5k". */
export function readSeries(
  reader: Reader,
  field: string,
  text: string,
  asked: Asked,
  [least, most]: readonly [number, number],
): number[] | undefined {
  if (text.trim() === '') return wrong(reader, field, `${asked.label} is missing.`)
  const parts = text.split('/')
  if (parts.length < least || parts.length > most) {
    const example = least === 2 && most === 2 ? '8.66k / 1.5k' : '10k / 40.2k / 20k'
    return wrong(reader, field, `${asked.label} takes values between slashes. Write them like ${example}.`)
  }
  const values = parts.map((part) => readNumber(reader, field, part, asked))
  return values.includes(undefined) ? undefined : (values as number[])
}

/** Quantities of different units after commas, in any order: "1 LSB, 5 ppm/K". */
export function readMixed(
  reader: Reader,
  field: string,
  text: string,
  label: string,
  units: readonly string[],
  rule: Rule | 'any' = 'not-negative',
): ReadonlyMap<string, number> {
  const found = new Map<string, number>()
  if (text.trim() === '') return found
  const [unit = '', ...also] = units
  for (const part of text.split(',')) {
    const read = readQuantity(reader, field, part, { label, unit, also, ...(rule === 'any' ? {} : { rule }) })
    if (read === undefined) continue
    if (found.has(read.unit)) wrong(reader, field, `${label} states ${read.unit} twice.`)
    found.set(read.unit, read.value)
  }
  return found
}

/** An object without the keys that are not stated. */
export function stated<T extends object>(object: T): T {
  // Copied and not cut: an object that had a key taken away is slow to read from then on.
  return Object.fromEntries(Object.entries(object).filter(([, value]) => value !== undefined)) as T
}

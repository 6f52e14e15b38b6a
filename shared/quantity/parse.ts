import { OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'
import { type Field, fieldUnits, type Quantity, takes } from './field.ts'
import { kinds, oneSpelling, unitOf } from './units.ts'

/** The cell needs arithmetic, which is loaded on first use: call `parseQuantityAsync`. */
export const needsArithmetic = Symbol('needs arithmetic')

/** The lazily loaded part: `arithmetic.ts`. */
export type Arithmetic = { evaluateQuantity(text: string, field: Field): Quantity }
export type LoadArithmetic = () => Promise<Arithmetic>

export type ParseOptions = {
  /** Read one comma between digits as the decimal mark. */
  decimalComma?: boolean
}

/** Gaps that group digits in print: no-break, thin and narrow no-break space. */
const GAPS = /[\u00a0\u2009\u202f]/g
/** Sign, whole part, decimals (both may be in groups of three), exponent, and the rest, which is the unit. */
const NUMBER =
  /^([+-]?)\s*(\d{1,3}(?:[\u00a0\u2009\u202f]\d{3})+(?!\d)|\d+)?(?:\.((?:\d{3}[\u00a0\u2009\u202f])+\d{1,3}(?!\d)|\d*))?(?:[eE]([+-]?\d{1,5}))?(.*)$/s

/**
 * A quantity as people type it: a number with an optional unit, read exactly. The decimal exponent is moved in the
 * text and the number is converted once, so the value is the double nearest to what was typed.
 * @param text `96 mV`, `-12.5 uV`, `0.012 %`, `4.7k`, `2 ppm/K`, `1e-3`; both minus signs, three signs for micro
 * @param field its label, the unit of a bare number, other units it takes
 * @returns the value in the field's unit and the text as typed; or `needsArithmetic`
 * @throws quantity-unreadable, quantity-wrong-kind; the sentence says what to write
 * @example parseQuantity('96 mV', { label: 'Span', unit: 'V' }).value // 0.096
 */
export function parseQuantity(
  text: string,
  field: Field,
  options: ParseOptions = {},
): Quantity | typeof needsArithmetic {
  const clean = oneSpelling(text.trim())
  if (clean === '') throw new OgeeError('quantity-unreadable', `${field.label} is missing.`)
  const number = withPoint(clean, text, options)
  const match = NUMBER.exec(number)
  const digits = match && `${match[2] ?? ''}${match[3] ?? ''}`
  const unitText = match?.[5]?.trim() ?? ''
  if (!match || !digits) return orArithmetic(clean, text, field)
  // "0.012 1/V" with a thin gap could be 0.0121 /V or 0.012 1/V: refused, not guessed.
  if (
    /[\u00a0\u2009\u202f]1$/.test(number.slice(0, number.length - match[5]!.length)) &&
    /^\//.test(unitText)
  ) {
    unreadable(`${text.trim()} can be read in two ways. Write the unit as /V.`)
  }
  const units = fieldUnits(field)
  const barePrefix = units.some(({ kind }) => kind === 'resistance')
  const unit = unitText === '' ? null : unitOf(unitText, barePrefix)
  if (unitText !== '' && unit === null) return orArithmetic(clean, text, field, unitText)
  const wanted = unit === null ? units[0]! : units.find(({ kind }) => kind === unit.kind)
  if (wanted === undefined) {
    throw new OgeeError('quantity-wrong-kind', `${takes(field)} ${text.trim()} is ${kinds[unit!.kind].name}.`)
  }
  const shift = unit === null ? 0 : unit.exponent - wanted.exponent
  return { value: exactValue(match, shift, text), unit: wanted.symbol, kind: wanted.kind, typed: text }
}

/** Comma to point when the caller said so and the cell is clear; a comma is otherwise refused, never guessed. */
function withPoint(clean: string, text: string, options: ParseOptions): string {
  if (!clean.includes(',')) return clean
  const single = /^[^,.]*\d?,\d[^,.]*$/.test(clean)
  if (single && options.decimalComma) return clean.replace(',', '.')
  const remedy = single
    ? `write ${text.trim().replace(',', '.')}.`
    : 'write the number with a decimal point and without group marks.'
  throw new OgeeError('quantity-unreadable', `${text.trim()}: ${remedy}`)
}

function exactValue(match: RegExpExecArray, shift: number, text: string): number {
  const whole = (match[2] ?? '').replace(GAPS, '')
  const part = (match[3] ?? '').replace(GAPS, '')
  const exponent = Number(match[4] ?? '0') + shift
  const value = Number(`${match[1] === '-' ? '-' : ''}${whole || '0'}.${part || '0'}e${exponent}`)
  if (!Number.isFinite(value)) unreadable(`${text.trim()} is too large.`)
  if (value === 0 && /[1-9]/.test(whole + part)) unreadable(`${text.trim()} is too small to be kept.`)
  // A typed -0 is 0: a sign without a size would only confuse comparisons.
  return value === 0 ? 0 : value
}

function orArithmetic(clean: string, text: string, field: Field, unit?: string): typeof needsArithmetic {
  if (looksLikeArithmetic(clean)) return needsArithmetic
  const typed = text.trim()
  if (unit === undefined || !/^\/?[A-Za-z°%‰]/.test(unit)) {
    unreadable(
      `${typed} cannot be read as a number. Write it like ${kinds[fieldUnits(field)[0]!.kind].example}.`,
    )
  }
  const near = unitOf(
    unit
      .replace(/v$/, 'V')
      .replace(/^K(?=[oV])/, 'k')
      .replace(/OHM$/i, 'ohm')
      .replace(/lsb/i, 'LSB'),
  )
  const hint = near === null ? takes(field) : `Capitals matter: did you mean ${spelled(unit)}?`
  unreadable(`${typed}: ${unit} is not a unit that is known here. ${hint}`)
}

const spelled = (unit: string): string =>
  unit
    .replace(/v$/, 'V')
    .replace(/^K(?=[oV])/, 'k')
    .replace(/OHM$/i, 'ohm')
    .replace(/lsb/i, 'LSB')

/** Operators between terms. A plus or minus needs a space before it, so that dates and ranges are not sums. */
function looksLikeArithmetic(clean: string): boolean {
  if (!/\d/.test(clean) || /^\d{1,4}([-/.])\d{1,2}\1\d{1,4}$/.test(clean)) return false
  return /[*^()×·]|[\d)A-Za-z%]\s*\/\s*[\d.(]|[\d)A-Za-z%]\s+[+-]\s*[\d.(]/.test(clean)
}

function unreadable(sentence: string): never {
  throw new OgeeError('quantity-unreadable', sentence)
}

/**
 * As `parseQuantity`, arithmetic included: `10/4096 V`, `3*12 uV + 5 uV`.
 * @param load brings the arithmetic on first use
 * @throws as `parseQuantity`; arithmetic-unavailable when it cannot be loaded
 * @example (await parseQuantityAsync('3*12 uV + 5 uV', { label: 'Offset', unit: 'V' }, load)).value // 41e-6
 */
export async function parseQuantityAsync(
  text: string,
  field: Field,
  load: LoadArithmetic,
  options: ParseOptions = {},
): Promise<Quantity> {
  const read = parseQuantity(text, field, options)
  if (read !== needsArithmetic) return read
  if (text.length > limits.expressionMax) {
    unreadable(
      `${field.label}: arithmetic may have ${limits.expressionMax} characters; this has ${text.length}.`,
    )
  }
  return (await loadArithmetic(load)).evaluateQuantity(text, field)
}

/** Loads the arithmetic, and says what is missing when that fails. */
export async function loadArithmetic(load: LoadArithmetic): Promise<Arithmetic> {
  try {
    return await load()
  } catch (cause) {
    const sentence =
      'Arithmetic in a cell needs a part that could not be loaded (arithmetic.mjs beside ogee.mjs). '
    throw new OgeeError('arithmetic-unavailable', `${sentence}Put it there, or type the result.`, { cause })
  }
}

import { OgeeError } from '../errors.ts'
import { parseCode } from '../quantity/code.ts'
import { type Field, pointFields, type Quantity } from '../quantity/field.ts'
import { needsArithmetic, type ParseOptions, parseQuantity } from '../quantity/parse.ts'
import type { MeasuredPoint } from '../solver/types.ts'

/** Columns of a points CSV (contract.md); those before `code` belong to the measurement, the rest to the point. */
export const groupColumns = [
  'unit',
  'channel',
  'range',
  'lot',
  'applied_gain',
  'applied_offset',
  'instrument',
  'key',
] as const
export const pointColumns = [
  'code',
  'word',
  'target',
  'measured',
  'uncertainty',
  'readings',
  'read_at',
  'temperature',
] as const
export type GroupColumn = (typeof groupColumns)[number]
export type PointColumn = (typeof pointColumns)[number]
export type Column = GroupColumn | PointColumn
export const columns: readonly Column[] = [...groupColumns, ...pointColumns]

/** How cells are read: decimal comma or not; arithmetic once it is loaded. */
export type CellOptions = ParseOptions & {
  arithmetic?: ((text: string, field: Field) => Quantity) | undefined
}

/** Thrown by a cell that needs arithmetic while none is loaded; nothing was changed, read the row again with it. */
export class ArithmeticNeeded extends Error {}

/**
 * A quantity cell, in the field's unit.
 * @throws OgeeError of the quantity; ArithmeticNeeded
 */
export function cellValue(text: string, field: Field, options: CellOptions): number {
  const read = parseQuantity(text, field, options)
  if (read !== needsArithmetic) return read.value
  if (options.arithmetic === undefined) throw new ArithmeticNeeded(text)
  return options.arithmetic(text, field).value
}

/** Readings of one cell, separated by semicolons. */
export function readingsOf(text: string, options: CellOptions): number[] {
  return text
    .split(';')
    .filter((part, i, all) => part.trim() !== '' || i < all.length - 1)
    .map((part) => cellValue(part, pointFields.readings, options))
}

const INSTANT = /^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}(:\d{2}(\.\d{1,9})?)?(Z|[+-]\d{2}:\d{2})$/

function instant(text: string): string {
  const clean = text.trim()
  const whole = INSTANT.test(clean) && !Number.isNaN(Date.parse(clean))
  // Date.parse turns 30 February into 2 March; the day must survive the round trip.
  const day =
    whole && new Date(`${clean.slice(0, 10)}T00:00:00Z`).toISOString().slice(0, 10) === clean.slice(0, 10)
  if (!day) {
    const remedy = 'Write it as 2026-03-02T14:07:00+01:00, with the offset.'
    throw new OgeeError('csv-cell', `${clean} is not a date and time. ${remedy}`)
  }
  return /T\d{2}:\d{2}(Z|[+-])/.test(clean) ? clean.replace(/(T\d{2}:\d{2})/, '$1:00') : clean
}

function word(text: string): string {
  const match = /^\s*(?:0[xX])?([0-9A-Fa-f]{1,6})\s*$/.exec(text)
  if (!match) throw new OgeeError('csv-cell', `${text.trim()} is not a word in hexadecimal, such as 0x8A1F.`)
  return `0x${match[1]!.toUpperCase()}`
}

type Setter = (point: MeasuredPoint, text: string, options: CellOptions) => void

/** How each column of a point is read. */
export const setPoint: Readonly<Record<PointColumn, Setter>> = {
  code: (point, text) => {
    point.code = parseCode(text, 'code')
  },
  word: (point, text) => {
    point.word = word(text)
  },
  target: (point, text, options) => {
    point.target = cellValue(text, pointFields.target, options)
  },
  measured: (point, text, options) => {
    point.measured = cellValue(text, pointFields.measured, options)
  },
  uncertainty: (point, text, options) => {
    const value = cellValue(text, pointFields.uncertainty, options)
    if (!(value > 0)) {
      throw new OgeeError(
        'uncertainty-not-positive',
        `The standard uncertainty is ${value} V; it must be over 0 V. Leave it out when it is not known.`,
      )
    }
    point.uncertainty = value
  },
  readings: (point, text, options) => {
    point.readings = readingsOf(text, options)
  },
  read_at: (point, text) => {
    point.readAt = instant(text)
  },
  temperature: (point, text, options) => {
    point.temperatureC = cellValue(text, pointFields.temperature, options)
  },
}

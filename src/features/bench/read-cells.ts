import type { Point } from '../../../shared/contract/point.ts'
import { isOgeeError, type OgeeError } from '../../../shared/errors.ts'
import { parseCode } from '../../../shared/quantity/code.ts'
import { type Field, pointFields } from '../../../shared/quantity/field.ts'
import { needsArithmetic, parseQuantity } from '../../../shared/quantity/parse.ts'
import type { InputColumn, Row } from './grid-state.ts'
import type { CellProblem } from './problems.ts'

/** Result of arithmetic, which is loaded on first use: until then a cell is pending. */
export type Arithmetic = (text: string, field: Field) => number | OgeeError | 'pending'

type Read<T> = { is: 'empty' } | { is: 'value'; value: T } | { is: 'pending' } | { is: 'wrong'; why: string }

const empty = { is: 'empty' } as const
const pending = { is: 'pending' } as const

export type CodeCell = { code: number } | { target: number }
export type MeasuredCell = { measured: number; isComputed: boolean } | { readings: number[] }

/** A quantity of a cell, arithmetic included. */
export function readQuantity(text: string, field: Field, arithmetic: Arithmetic): Read<number> {
  if (text.trim() === '') return empty
  try {
    const read = parseQuantity(text, field)
    if (read !== needsArithmetic) return { is: 'value', value: read.value }
    const result = arithmetic(text, field)
    if (result === 'pending') return pending
    if (typeof result === 'number') return { is: 'value', value: result }
    return { is: 'wrong', why: result.message }
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return { is: 'wrong', why: error.message }
  }
}

/** A code, decimal or hex, or a wanted voltage when a unit of volts stands there. */
export function readCode(text: string, arithmetic: Arithmetic): Read<CodeCell> {
  const clean = text.trim()
  if (clean === '') return empty
  if (/V\s*\)?$/.test(clean)) {
    const target = readQuantity(clean, pointFields.target, arithmetic)
    return target.is === 'value' ? { is: 'value', value: { target: target.value } } : target
  }
  try {
    return { is: 'value', value: { code: parseCode(clean, 'code') } }
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return {
      is: 'wrong',
      why: `${clean} is not a code. Write a whole number, hex after 0x, or a voltage with its unit: 2.5 V.`,
    }
  }
}

/** One reading, or several between semicolons. */
export function readMeasured(text: string, arithmetic: Arithmetic): Read<MeasuredCell> {
  if (!text.includes(';')) {
    const one = readQuantity(text, pointFields.measured, arithmetic)
    if (one.is !== 'value') return one
    const isComputed = /[*/^(×·]|\d\s+[-+]/.test(text)
    return { is: 'value', value: { measured: one.value, isComputed } }
  }
  const parts = text.split(';').filter((part) => part.trim() !== '')
  if (parts.length === 0) return empty
  const readings: number[] = []
  for (const part of parts) {
    const one = readQuantity(part, pointFields.readings, arithmetic)
    if (one.is === 'pending' || one.is === 'wrong') return one
    if (one.is === 'value') readings.push(one.value)
  }
  return { is: 'value', value: { readings } }
}

export type ReadRow = {
  code: CodeCell | null
  measured: MeasuredCell | null
  /** Complete: it goes into the fit and the record. */
  point: Point | null
}

export type ReadRows = {
  rows: readonly ReadRow[]
  points: readonly Point[]
  /** Row of each point, for refusals that name points. */
  rowOf: readonly number[]
  problems: readonly CellProblem[]
  isPending: boolean
}

/** All rows as points. A row without a reading is not measured yet and no error. */
export function readRows(rows: readonly Row[], arithmetic: Arithmetic): ReadRows {
  const result = { rows: [] as ReadRow[], points: [] as Point[], rowOf: [] as number[] }
  const problems: CellProblem[] = []
  let isPending = false
  rows.forEach((row, index) => {
    const take = <T>(column: InputColumn, read: Read<T>): T | null => {
      if (read.is === 'wrong') problems.push({ row: index, column, message: read.why })
      if (read.is === 'pending') isPending = true
      return read.is === 'value' ? read.value : null
    }
    const code = take('code', readCode(row.code, arithmetic))
    const measured = take('measured', readMeasured(row.measured, arithmetic))
    const u = take('u', readQuantity(row.u, pointFields.uncertainty, arithmetic))
    if (measured !== null && row.code.trim() === '') {
      problems.push({ row: index, column: 'code', message: `Row ${index + 1} has a reading and no code.` })
    }
    const point = code && measured ? { ...pointOf(code, measured, u), ...row.extra } : null
    result.rows.push({ code, measured, point })
    if (point) {
      result.points.push(point)
      result.rowOf.push(index)
    }
  })
  return { ...result, problems, isPending }
}

function pointOf(code: CodeCell, measured: MeasuredCell, uncertainty: number | null): Point {
  return {
    ...code,
    ...('readings' in measured ? { readings: measured.readings } : { measured: measured.measured }),
    ...(uncertainty === null ? {} : { uncertainty }),
  }
}

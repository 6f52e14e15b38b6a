import type { FieldError } from '../../../shared/errors.ts'
import type { InputColumn } from './grid-state.ts'

export type CellProblem = { row: number; column: InputColumn; message: string }

const columnOfField: Readonly<Record<string, InputColumn>> = {
  code: 'code',
  word: 'code',
  target: 'code',
  measured: 'measured',
  readings: 'measured',
  uncertainty: 'u',
}

/**
 * Refusals at points (`/points/3/measured`) as problems of cells. `rowOf` says which row each point came from; places
 * that are no point's come back as `others`.
 */
export function cellProblems(
  errors: readonly FieldError[],
  rowOf: readonly number[],
): { cells: CellProblem[]; others: FieldError[] } {
  const cells: CellProblem[] = []
  const others: FieldError[] = []
  for (const error of errors) {
    const [, index, field = 'measured'] = /^\/points\/(\d+)(?:\/(\w+))?/.exec(error.path) ?? []
    const row = index === undefined ? undefined : rowOf[Number(index)]
    if (row === undefined) others.push(error)
    else cells.push({ row, column: columnOfField[field] ?? 'measured', message: error.message })
  }
  return { cells, others }
}

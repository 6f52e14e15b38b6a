import { OgeeError } from '../errors.ts'
import { type Column, columns } from './row.ts'
import type { CsvRow } from './split-csv.ts'

/** Where each known column stands, and how many cells a row has. */
export type Header = { at: ReadonlyMap<Column, number>; width: number }

/**
 * Reads the header row. Columns may stand in any order; a column that starts with x_ is passed over, any other unknown
 * one is refused by name.
 * @throws csv-header with the line and the column's position
 * @example headerOf({ cells: ['code', 'measured'], line: 1 }, false).width // 2
 */
export function headerOf(row: CsvRow, unitRequired: boolean): Header {
  const at = new Map<Column, number>()
  row.cells.forEach((cell, i) => {
    const name = cell.trim()
    if (name.startsWith('x_')) return
    if (name === '' && row.cells.slice(i).every((rest) => rest.trim() === '')) return
    const column = columns.find((known) => known === name)
    if (column === undefined) refuse(row.line, i, unknownColumn(name))
    if (at.has(column)) refuse(row.line, i, `Column ${name} stands twice.`)
    at.set(column, i)
  })
  if (!at.has('measured') && !at.has('readings'))
    refuse(row.line, null, 'Column measured (or readings) is missing.')
  if (!at.has('code') && !at.has('word') && !at.has('target')) {
    refuse(row.line, null, 'Column code (or word, or target) is missing.')
  }
  if (unitRequired && !at.has('unit')) refuse(row.line, null, 'Column unit is missing; a batch needs it.')
  return { at, width: row.cells.length }
}

function unknownColumn(name: string): string {
  const near = columns.find((known) => known === name.toLowerCase().replace(/[\s-]+/g, '_'))
  const hint =
    near === undefined ? `Known are ${columns.join(', ')}; others start with x_.` : `Did you mean ${near}?`
  return name === '' ? `A column has no name. ${hint}` : `Column ${name} is unknown. ${hint}`
}

function refuse(line: number, index: number | null, sentence: string): never {
  const where = index === null ? `line ${line}` : `line ${line}, column ${index + 1}`
  throw new OgeeError('csv-header', `${where[0]!.toUpperCase()}${where.slice(1)}: ${sentence}`, {
    errors: [{ path: where, message: sentence }],
  })
}

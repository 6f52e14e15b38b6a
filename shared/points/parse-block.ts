import Papa from 'papaparse'
import { OgeeError } from '../errors.ts'
import { parseCode } from '../quantity/code.ts'
import { type Field, pointFields } from '../quantity/field.ts'
import { ArithmeticNeeded, type CellOptions, cellValue, readingsOf } from './row.ts'

/** A column of the points grid, from the focused cell to the right. */
export type GridColumn = 'code' | 'target' | 'measured' | 'uncertainty' | 'readings' | 'temperature'

/**
 * One pasted cell: its text as it came, and either a value (a list for readings, null for an empty cell) or a message.
 * `comma` when the only trouble is a comma that may be a decimal comma; `arithmetic` when it waits for the arithmetic.
 */
export type BlockCell = {
  text: string
  value: number | number[] | null
  message: string | null
  comma: boolean
  arithmetic: boolean
}

export type Block = {
  rows: BlockCell[][]
  /** Cells with a value, and cells with any text. */
  taken: number
  filled: number
  /** "5 of 6 cells taken. Cell 4, 7,4984718: a comma. Is it a decimal comma?" Null when all were taken. */
  summary: string | null
  /** Every refused cell may be a decimal comma: one question settles them. */
  asksComma: boolean
}

/**
 * Reads a block of cells from a clipboard (spreadsheet, text editor, web page): each cell is right, or refused with a
 * sentence; nothing is changed silently.
 * @param text clipboard text; tabs between cells, or semicolons or commas where no tab is
 * @param columns what the grid's columns take, from the focused cell on
 * @param options `decimalComma` after [Yes, all]; `arithmetic` once it is loaded
 * @example parseBlock('96 mV\r\n', ['measured']).rows[0][0].value // 0.096
 */
export function parseBlock(text: string, columns: readonly GridColumn[], options: CellOptions = {}): Block {
  const rows = splitBlock(text, columns, options.decimalComma ?? false).map((cells) =>
    cells.map((cell, i) => readCell(cell, columns[i], options)),
  )
  const cells = rows.flat().filter((cell) => cell.text.trim() !== '')
  const refused = cells.filter((cell) => cell.message !== null)
  return {
    rows,
    taken: cells.length - refused.length,
    filled: cells.length,
    summary: summaryOf(cells),
    asksComma: refused.length > 0 && refused.every((cell) => cell.comma),
  }
}

function readCell(text: string, column: GridColumn | undefined, options: CellOptions): BlockCell {
  const cell: BlockCell = { text, value: null, message: null, comma: false, arithmetic: false }
  if (text.trim() === '') return cell
  if (column === undefined) {
    cell.message = `${text.trim()}: there is no column for it.`
    return cell
  }
  try {
    cell.value = readValue(text, column, options)
  } catch (error) {
    if (error instanceof ArithmeticNeeded) {
      cell.message = `${text.trim()}: arithmetic, not read yet.`
      cell.arithmetic = true
    } else if (error instanceof OgeeError) {
      cell.message = error.message
      cell.comma = !options.decimalComma && readsWithComma(text, column, options)
    } else throw error
  }
  return cell
}

function readValue(text: string, column: GridColumn, options: CellOptions): number | number[] {
  if (column === 'code') return parseCode(text, 'code')
  if (column === 'readings') return readingsOf(text, options)
  const field: Field = pointFields[column]
  return cellValue(text, field, options)
}

function readsWithComma(text: string, column: GridColumn, options: CellOptions): boolean {
  if (column === 'code' || !text.includes(',')) return false
  try {
    readValue(text, column, { ...options, decimalComma: true })
    return true
  } catch {
    return false
  }
}

function summaryOf(cells: readonly BlockCell[]): string | null {
  const at = cells.findIndex((cell) => cell.message !== null)
  if (at < 0) return null
  const cell = cells[at]!
  const taken = cells.filter(({ message }) => message === null).length
  const what = cell.comma ? `${cell.text.trim()}: a comma. Is it a decimal comma?` : cell.message
  return `${taken} of ${cells.length} cells taken. Cell ${at + 1}, ${what}`
}

/** Cells of the clipboard: quoted cells and line ends inside them as spreadsheets write them. */
function splitBlock(text: string, columns: readonly GridColumn[], decimalComma: boolean): string[][] {
  const clean = text.replace(/^\ufeff/, '').replace(/\r\n?/g, '\n')
  const delimiter = delimiterOf(clean, columns, decimalComma)
  const { data } = Papa.parse<string[]>(clean, { delimiter, newline: '\n' })
  // A copied block ends with a line end: the empty row after it is no row. Empty rows inside stay in their place.
  while (data.length > 0 && data[data.length - 1]!.every((cell) => cell === '')) data.pop()
  return data
}

/**
 * Tab where there is one. Otherwise semicolons or commas only when every line has the same number of them and they
 * cannot be something else: readings in one cell, or a decimal comma.
 */
function delimiterOf(clean: string, columns: readonly GridColumn[], decimalComma: boolean): string {
  if (clean.includes('\t')) return '\t'
  const lines = clean.split('\n').filter((line) => line.trim() !== '')
  const per = (mark: string): number => {
    const counts = new Set(lines.map((line) => line.split(mark).length - 1))
    return counts.size === 1 ? [...counts][0]! : 0
  }
  if (columns[0] !== 'readings' && per(';') > 0) return ';'
  const commas = per(',')
  if (columns[0] === 'code' && commas > 0 && columns.length > 1) return ','
  const decimal = lines.some((line) => /^\s*[+-]?\d+,\d+(\D|$)/.test(line) && !/[.]/.test(line))
  return commas > 0 && columns.length > 1 && !decimalComma && !(commas === 1 && decimal) ? ',' : '\t'
}

import { guarded } from './formula-guard.ts'

export type CsvCell = string | number | null | undefined

/**
 * A line of RFC 4180 without its end. A text that a spreadsheet would run as a formula is kept from it; a number is written as the
 * shortest decimal that is this double, its minus sign too, and never guarded. Nothing is an empty cell.
 * @example csvLine(['=1+1', -0.5, null, 'a, b']) // "'=1+1,-0.5,,\"a, b\""
 */
export function csvLine(cells: readonly CsvCell[]): string {
  return cells.map(cellText).join(',')
}

function cellText(cell: CsvCell): string {
  if (cell === null || cell === undefined) return ''
  if (typeof cell === 'number') return String(cell)
  const text = guarded(cell)
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text
}

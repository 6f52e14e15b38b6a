import type { Outcome, Verdict } from '../../../../shared/contract/primitives.ts'
import { csvLine } from '../../../../shared/points/csv-line.ts'
import { unguarded } from '../../../../shared/points/formula-guard.ts'
import { splitCsv } from '../../../../shared/points/split-csv.ts'

/** A measurement of the file that needs a look. Without a verdict it was not recorded. */
export type RowReport = {
  firstLine: number
  lastLine: number
  unit: string
  channel: string
  range: string
  verdict: Verdict | Outcome | null
  message: string
}

/**
 * The rows of the units that were not recorded whole, as they stand in the file, with what is wrong in a column `x_problem`, which a
 * points CSV may have: repaired, it can be uploaded. What was recorded already is recognised and not doubled.
 * @param reports with a verdict are recorded and left out
 */
export function repairCsv(text: string, reports: readonly RowReport[]): string {
  const { rows, delimiter } = splitCsv(text)
  const [head, ...rest] = rows
  if (!head) return ''
  const bad = reports.filter(({ verdict }) => verdict === null)
  const messages = new Map(bad.map(({ firstLine, message }) => [firstLine, message]))
  const units = new Set(bad.map(({ unit }) => unit).filter((unit) => unit !== ''))
  const unitAt = head.cells.findIndex((cell) => cell.trim() === 'unit')
  const problemAt = head.cells.indexOf('x_problem')
  const put = (cells: readonly string[], last: string) =>
    problemAt < 0 ? [...cells, last] : cells.map((cell, i) => (i === problemAt ? last : cell))
  // Cells and delimiter go out as they came in: a decimal comma means something only beside a semicolon.
  const line = (cells: readonly string[]) => cells.map((cell) => quoted(cell, delimiter)).join(delimiter)
  const lines = [line(put(head.cells, 'x_problem'))]
  for (const { cells, line: at } of rest) {
    const unit = cells[unitAt] ?? ''
    // A row without a unit is never recorded, while only the first of its measurement is named.
    const isOfBad = unit.trim() === '' || units.has(unguarded(unit)) || messages.has(at)
    if (isOfBad) lines.push(line(put(cells, messages.get(at) ?? '')))
  }
  return lines.map((one) => `${one}\r\n`).join('')
}

const quoted = (cell: string, delimiter: string) =>
  /["\r\n]/.test(cell) || cell.includes(delimiter) ? `"${cell.replaceAll('"', '""')}"` : cell

const heads = ['first_line', 'last_line', 'unit', 'channel', 'range', 'verdict', 'message']

/** What became of each measurement that needs a look. */
export function reportCsv(reports: readonly RowReport[]): string {
  const lines = reports.map(({ firstLine, lastLine, unit, channel, range, verdict, message }) =>
    csvLine([firstLine, lastLine, unit, channel, range, verdict, message]),
  )
  return [csvLine(heads), ...lines].map((line) => `${line}\r\n`).join('')
}

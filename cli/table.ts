import { type CsvCell, csvLine } from '../shared/points/csv-line.ts'

/** Plain text tables: columns aligned, numbers to the right, two spaces between. */

export type Cell = CsvCell
export type Column = { head: string; right?: boolean }

const shown = (cell: Cell) => (cell === null || cell === undefined ? '–' : String(cell))

export function textTable(columns: readonly Column[], rows: readonly (readonly Cell[])[]): string {
  const cells = rows.map((row) => row.map(shown))
  const widths = columns.map(({ head }, i) =>
    Math.max(head.length, ...cells.map((row) => [...(row[i] ?? '')].length)),
  )
  const line = (row: readonly string[]) =>
    row
      .map((text, i) => padded(text, widths[i] ?? 0, columns[i]?.right === true))
      .join('  ')
      .trimEnd()
  return `${[line(columns.map(({ head }) => head)), ...cells.map(line)].join('\n')}\n`
}

function padded(text: string, width: number, right: boolean): string {
  const room = ' '.repeat(Math.max(0, width - [...text].length))
  return right ? room + text : text + room
}

/** Pairs of a name and a value under each other, such as the head of a result. */
export function pairs(rows: readonly (readonly [string, string])[]): string {
  const width = Math.max(...rows.map(([name]) => name.length))
  return rows.map(([name, value]) => `${name.padEnd(width)}  ${value}\n`).join('')
}

/** RFC 4180 with a header row. */
export function csv(heads: readonly string[], rows: readonly (readonly Cell[])[]): string {
  return [heads, ...rows].map((row) => `${csvLine(row)}\n`).join('')
}

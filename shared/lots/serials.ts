import { serial } from '../contract/primitives.ts'
import { type FieldError, OgeeError } from '../errors.ts'
import { unguarded } from '../points/formula-guard.ts'
import { type CsvRow, splitCsv } from '../points/split-csv.ts'

const names = ['unit', 'serial']

/**
 * Serials from a file: the column `unit` (or `serial`) of a CSV, or, without a header, one a line. Serials stay as they are
 * written: leading zeros, case and quotes count; one that stands twice is taken once.
 * @throws csv-empty, csv-quotes, csv-header; csv-cell with the line of each serial that cannot be one
 * @example parseSerials('031\n032\n') // ['031', '032']
 */
export function parseSerials(text: string): string[] {
  const { rows } = splitCsv(text)
  const [head = [], ...rest] = rows.map(({ cells }) => cells)
  const column = head.findIndex((cell) => names.includes(cell.trim().toLowerCase()))
  const taken = column < 0 ? rows : rows.slice(1)
  if (column < 0 && head.length > 1) {
    throw new OgeeError('csv-header', 'The file has several columns: name the one of the serials unit.', {
      errors: [{ path: 'line 1', message: 'There is no column unit.' }],
    })
  }
  if (column >= 0 && rest.length === 0) {
    throw new OgeeError('csv-empty', 'The file has a header row and no serials.')
  }
  const found = new Set<string>()
  const errors: FieldError[] = []
  for (const row of taken) take(row, Math.max(column, 0), column >= 0, found, errors)
  if (errors.length > 0) {
    throw new OgeeError('csv-cell', `${errors[0]!.path}: ${errors[0]!.message}`, {
      errors: errors.slice(0, 100),
    })
  }
  return [...found]
}

function take(
  { cells, line }: CsvRow,
  column: number,
  isGuarded: boolean,
  found: Set<string>,
  errors: FieldError[],
): void {
  const cell = cells[column] ?? ''
  const parsed = serial.safeParse(isGuarded ? unguarded(cell) : cell)
  if (parsed.success) found.add(parsed.data)
  else errors.push({ path: `line ${line}, unit`, message: parsed.error.issues[0]?.message ?? 'No serial.' })
}

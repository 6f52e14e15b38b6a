import { type ErrorCode, OgeeError } from '../errors.ts'
import { parseCode } from '../quantity/code.ts'
import type { MeasuredPoint, PerAdjuster } from '../solver/types.ts'
import type { Column } from './row.ts'

/** One measurement: rows next to each other with the same unit, channel and range. Cells left empty are undefined. */
export type PointGroup = {
  unit?: string | undefined
  channel?: string | undefined
  range?: string | undefined
  lot?: string | undefined
  instrument?: string | undefined
  key?: string | undefined
  applied?: PerAdjuster<number> | undefined
  points: MeasuredPoint[]
  firstLine: number
  lastLine: number
}

/** What is wrong, and where: the unit it spoils is left out, the others go on. */
export type CsvProblem = {
  code: ErrorCode
  line: number
  column: string | null
  message: string
  unit?: string | undefined
  channel?: string | undefined
  range?: string | undefined
}

export function sameMeasurement(a: Map<Column, string>, b: Map<Column, string>): boolean {
  return (['unit', 'channel', 'range', 'key'] as const).every((column) => a.get(column) === b.get(column))
}

export function readApplied(
  cells: Map<Column, string>,
  group: PointGroup,
  add: (code: ErrorCode, column: string, message: string) => void,
): void {
  for (const which of ['gain', 'offset'] as const) {
    const column = `applied_${which}` as const
    const text = cells.get(column)!
    if (text === '') continue
    try {
      group.applied = { ...group.applied, [which]: parseCode(text, column) }
    } catch (error) {
      if (!(error instanceof OgeeError)) throw error
      add('csv-cell', column, error.message)
    }
  }
}

export function names(group: PointGroup): Pick<CsvProblem, 'unit' | 'channel' | 'range'> {
  return { unit: group.unit, channel: group.channel, range: group.range }
}

export function place(line: number, column: string | null, message: string): string {
  return column === null ? `Line ${line}: ${message}` : `Line ${line}, ${column}: ${message}`
}

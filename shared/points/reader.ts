import { type ErrorCode, OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'
import type { MeasuredPoint } from '../solver/types.ts'
import { unguarded } from './formula-guard.ts'
import { type CsvProblem, names, type PointGroup, place, readApplied, sameMeasurement } from './group.ts'
import { type Header, headerOf } from './header.ts'
import {
  ArithmeticNeeded,
  type CellOptions,
  type Column,
  groupColumns,
  pointColumns,
  setPoint,
} from './row.ts'
import type { CsvRow, Delimiter } from './split-csv.ts'

export type ReaderOptions = {
  /** Channel and range names of the design: a single one is the default, of several one is required. */
  channels?: readonly string[] | undefined
  ranges?: readonly string[] | undefined
  /** A batch needs a unit in every row. */
  unitRequired?: boolean | undefined
  /** Remembers which measurements the file has had; a long file needs one that is smaller than a Map. */
  seen?: SeenLines | undefined
}

/** The line in which a measurement stood first; undefined, and remembered, when it has not been seen. */
export type SeenLines = { firstLine: (measurement: string, line: number) => number | undefined }

type Open = { group: PointGroup; cells: Map<Column, string>; bad: boolean; full: boolean }

/**
 * Reads rows of a points CSV one by one, so that a file of any length can be streamed. `push` a row, then take what
 * is finished with `take`; `end` closes the last measurement.
 */
export class PointsReader {
  private readonly header: Header
  private readonly options: ReaderOptions
  private readonly cellOptions: CellOptions
  private readonly seen: SeenLines
  private open: Open | null = null
  private groups: PointGroup[] = []
  private problems: CsvProblem[] = []
  /** Line of a row that could not be split, while it may still belong to what comes next. */
  private brokenAt: number | null = null

  /** @throws csv-header */
  constructor(header: CsvRow, delimiter: Delimiter, options: ReaderOptions = {}) {
    this.header = headerOf(header, options.unitRequired ?? false)
    this.options = options
    this.seen = options.seen ?? new SeenInMap()
    this.cellOptions = { decimalComma: delimiter !== ',' }
  }

  /** Brings the arithmetic that `push` asked for. */
  giveArithmetic(arithmetic: NonNullable<CellOptions['arithmetic']>): void {
    this.cellOptions.arithmetic = arithmetic
  }

  /** @throws ArithmeticNeeded, before anything is changed: load it, `giveArithmetic`, push the same row again. */
  push(row: CsvRow): void {
    const read = this.readPoint(row)
    const cells = this.groupCells(row)
    if (this.open === null || !sameMeasurement(this.open.cells, cells)) this.start(row, cells)
    this.brokenAt = null
    const open = this.open!
    open.group.lastLine = row.line
    const before = this.problems.length
    this.problems.push(...read.problems.map((problem) => ({ ...problem, ...names(open.group) })))
    this.checkAgreement(open, cells, row.line)
    if (this.problems.length > before) open.bad = true
    if (open.group.points.length < limits.pointsMax) open.group.points.push(read.point)
    else if (!open.full) this.refuseFull(open, row.line)
  }

  /** A row that cannot be split into cells may be of the measurement before it or of the one after it: neither is taken. */
  refuseRow(line: number, message: string): void {
    const spoilt = this.open === null ? {} : names(this.open.group)
    this.problems.push({ code: 'csv-quotes', line, column: null, message, ...spoilt })
    if (this.open !== null) this.open.bad = true
    this.brokenAt = line
  }

  end(): void {
    this.close()
  }

  /** What was finished since the last call. */
  take(): { groups: PointGroup[]; problems: CsvProblem[] } {
    const { groups, problems } = this
    this.groups = []
    this.problems = []
    return { groups, problems }
  }

  private readPoint(row: CsvRow): { point: MeasuredPoint; problems: CsvProblem[] } {
    const point: MeasuredPoint = {}
    const problems: CsvProblem[] = []
    const add = (code: ErrorCode, column: string | null, message: string): void => {
      problems.push({ code, line: row.line, column, message: place(row.line, column, message) })
    }
    if (row.cells.slice(this.header.width).some((cell) => cell.trim() !== '')) {
      add('csv-cell', null, 'the row has more cells than the header. A comma inside a cell needs quotes.')
    }
    for (const column of pointColumns) {
      const text = this.cell(row, column)
      if (text === '') continue
      try {
        setPoint[column](point, text, this.cellOptions)
      } catch (error) {
        if (error instanceof ArithmeticNeeded || !(error instanceof OgeeError)) throw error
        add(error.code === 'uncertainty-not-positive' ? error.code : 'csv-cell', column, error.message)
      }
    }
    if (problems.length === 0) this.checkWhole(point, add)
    return { point, problems }
  }

  private checkWhole(
    point: MeasuredPoint,
    add: (code: ErrorCode, column: string, message: string) => void,
  ): void {
    const { code, word, target, measured, readings } = point
    if (code === undefined && word === undefined && target === undefined) {
      add('csv-cell', 'code', 'code, word or target is missing.')
    }
    if (measured === undefined && readings === undefined) add('csv-cell', 'measured', 'measured is missing.')
    if (measured !== undefined && readings !== undefined) {
      add('csv-cell', 'readings', 'give measured or readings, not both.')
    }
  }

  private groupCells(row: CsvRow): Map<Column, string> {
    const cells = new Map<Column, string>()
    for (const column of groupColumns) cells.set(column, unguarded(this.cell(row, column)))
    return cells
  }

  private cell(row: CsvRow, column: Column): string {
    const at = this.header.at.get(column)
    const text = at === undefined ? '' : (row.cells[at] ?? '')
    // A serial is taken as it stands; its own check refuses spaces at an end.
    return column === 'unit' && text.trim() !== '' ? text : text.trim()
  }

  private start(row: CsvRow, cells: Map<Column, string>): void {
    this.close()
    const group: PointGroup = { points: [], firstLine: row.line, lastLine: row.line }
    for (const column of ['unit', 'lot', 'instrument', 'key'] as const) {
      const text = cells.get(column)!
      if (text !== '') group[column] = text
    }
    this.open = { group, cells, bad: false, full: false }
    const add = (code: ErrorCode, column: string, message: string): void => {
      this.open!.bad = true
      this.problems.push({
        code,
        line: row.line,
        column,
        message: place(row.line, column, message),
        ...names(group),
      })
    }
    if (this.brokenAt !== null) {
      add('csv-quotes', 'unit', `left out, because line ${this.brokenAt} before it cannot be read.`)
    }
    this.resolve('channel', this.options.channels, cells, group, add)
    this.resolve('range', this.options.ranges, cells, group, add)
    if (this.options.unitRequired && group.unit === undefined) add('csv-cell', 'unit', 'unit is missing.')
    readApplied(cells, group, add)
    this.checkSeen(group, row.line, add)
  }

  private resolve(
    column: 'channel' | 'range',
    known: readonly string[] | undefined,
    cells: Map<Column, string>,
    group: PointGroup,
    add: (code: ErrorCode, column: string, message: string) => void,
  ): void {
    const text = cells.get(column)!
    if (text !== '') {
      group[column] = text
      if (known && !known.includes(text)) {
        add(`${column}-unknown`, column, `the design has no ${column} ${text}. It has ${known.join(', ')}.`)
      }
    } else if (known?.length === 1) group[column] = known[0]
    else if (known)
      add(`${column}-required`, column, `the design has several: name one of ${known.join(', ')}.`)
  }

  private checkSeen(
    { unit, channel, range, key }: PointGroup,
    line: number,
    add: (code: ErrorCode, column: string, message: string) => void,
  ): void {
    const id = JSON.stringify([unit, channel, range, key])
    const first = this.seen.firstLine(id, line)
    if (first !== undefined) {
      const what = unit === undefined ? 'this measurement' : `unit ${unit}`
      add('duplicate-unit', 'unit', `${what} stands in line ${first} too. Give one of them another key.`)
    }
  }

  private checkAgreement(open: Open, cells: Map<Column, string>, line: number): void {
    for (const column of ['lot', 'applied_gain', 'applied_offset', 'instrument'] as const) {
      const first = open.cells.get(column)!
      const here = cells.get(column)!
      if (here === first) continue
      const message = `${here || 'nothing'} here, ${first || 'nothing'} in line ${open.group.firstLine}; rows of one measurement must agree.`
      this.problems.push({
        code: 'csv-cell',
        line,
        column,
        message: place(line, column, message),
        ...names(open.group),
      })
    }
  }

  /** A measurement of endless rows is named once and not kept: memory stays bounded. */
  private refuseFull(open: Open, line: number): void {
    open.full = true
    open.bad = true
    const message = place(line, null, `one measurement has more than ${limits.pointsMax} points.`)
    this.problems.push({ code: 'too-many-points', line, column: null, message, ...names(open.group) })
  }

  private close(): void {
    if (this.open !== null && !this.open.bad) this.groups.push(this.open.group)
    this.open = null
  }
}

class SeenInMap implements SeenLines {
  private readonly lines = new Map<string, number>()

  firstLine(measurement: string, line: number): number | undefined {
    const first = this.lines.get(measurement)
    if (first === undefined) this.lines.set(measurement, line)
    return first
  }
}

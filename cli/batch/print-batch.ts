import { csvLine } from '../../shared/points/csv-line.ts'
import { codesCsv } from '../codes-rendering.ts'
import type { Context, Format } from '../command.ts'
import { wantsColour } from '../io.ts'
import { verdictText } from '../output.ts'
import { lsb } from '../quantities.ts'
import { resultCells } from '../record-rendering.ts'
import type { Cell } from '../table.ts'
import type { Item } from './item.ts'
import type { Summary } from './summary.ts'

/** How a batch looks while it comes: a head, lines, a foot. What was printed before trouble is whole in every format. */

const heads = [
  'line',
  'unit',
  'channel',
  'range',
  'pass',
  'verdict',
  'accepted',
  ...codesCsv.heads,
  'exit',
  'record',
  'message',
]

type Finished = Item & { outcome: NonNullable<Item['outcome']> }

export class BatchPrinter {
  private readonly format: Format
  private readonly colour: boolean
  private printed = 0
  private begun = false

  constructor({ io, format }: Context) {
    this.format = format
    this.colour = wantsColour(io)
  }

  /** Before anything else, once. */
  head(): string {
    if (this.begun) return ''
    this.begun = true
    if (this.format === 'csv') return `${csvLine(heads)}\n`
    if (this.format === 'json') return '{"format":"ogee.batch/1","lines":['
    return this.format === 'table' ? `${aligned(tableHeads)}\n` : ''
  }

  lines(items: readonly Item[]): string {
    return items.map((item) => (item.outcome === null ? '' : this.line(item as Finished))).join('')
  }

  foot(summary: Summary): string {
    return this.format === 'json' ? `\n],"summary":${JSON.stringify(summary)}}\n` : ''
  }

  private line(item: Finished): string {
    switch (this.format) {
      case 'csv':
        return `${csvLine(csvRow(item))}\n`
      case 'table':
        return `${aligned(tableRow(item, this.colour))}\n`
      case 'ndjson':
        return `${JSON.stringify(plain(item))}\n`
      case 'json':
        this.printed += 1
        return `${this.printed === 1 ? '' : ','}\n${JSON.stringify(plain(item))}`
    }
  }
}

const plain = ({ line, unit, channel, range, outcome }: Finished) => ({
  line,
  unit,
  channel,
  range,
  ...outcome,
})

function csvRow({ line, unit, channel, range, outcome }: Finished): Cell[] {
  if (!('record' in outcome)) {
    const { problem, exit } = outcome
    const empty = codesCsv.heads.map(() => null)
    return [line, unit, channel, range, null, null, null, ...empty, exit, null, problem.detail]
  }
  const { record, exit } = outcome
  return [
    line,
    record.unit,
    record.channel,
    record.range,
    record.pass,
    record.verdict,
    String(record.accepted),
    ...resultCells(record),
    exit,
    record.id,
    [
      ...('spooled' in record ? [`Not yet sent: ${record.spooled}`] : []),
      ...record.notices.map(({ message }) => message),
    ].join(' ') || null,
  ]
}

const tableHeads = ['Line', 'Unit', 'Channel', 'Range', 'Gain', 'Offset', 'Worst', 'Verdict']
/** The widths are set beforehand: lines are printed while the rest is still to come. */
const widths = [7, 20, 7, 8, 6, 6, 10, 0]
const isNumber = [true, false, false, false, true, true, true, false]

function tableRow({ line, unit, channel, range, outcome }: Finished, colour: boolean): string[] {
  const place = [line, unit, channel, range]
  if (!('record' in outcome)) {
    return [...place, null, null, null, `✕ ${outcome.problem.detail}`].map(shown)
  }
  const { record } = outcome
  const cells = resultCells(record)
  const worst = cells[6]
  const said = record.notices.map(({ code }) => code.replaceAll('-', ' '))
  const also = ['spooled' in record ? 'not yet sent' : [], said].flat().join(', ')
  const verdict = record.verdict === null ? '' : verdictText(record.verdict, colour)
  return [
    line,
    record.unit,
    record.channel,
    record.range,
    cells[0],
    cells[2],
    typeof worst === 'number' ? lsb(worst) : null,
    also === '' ? verdict : `${verdict} (${also})`,
  ].map(shown)
}

const shown = (cell: Cell) => (cell === null || cell === undefined ? '–' : String(cell))

function aligned(cells: readonly string[]): string {
  return cells
    .map((text, i) => {
      const room = ' '.repeat(Math.max(0, (widths[i] ?? 0) - [...text].length))
      return isNumber[i] ? room + text : text + room
    })
    .join('  ')
    .trimEnd()
}

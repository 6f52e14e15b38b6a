import type { RecordLine } from '../../shared/contract/record.ts'
import { recordCells, recordHeads } from '../../shared/history/record-cells.ts'
import { limits } from '../../shared/limits.ts'
import type { Client } from '../client.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { filterOptions, type HistoryQuery, historyPages, readFilters } from '../history-filters.ts'
import { text, wholeNumber } from '../option-values.ts'
import { print, type Rendering, render } from '../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../server-options.ts'
import { textTable } from '../table.ts'

type Options = ConnectionOptions & { query: HistoryQuery; limit: number }

export const historyCommand: Command<Options> = {
  about: serverAbout,
  options: [
    ...filterOptions,
    { flags: '--limit <count>', says: `how many at most (default ${limits.pageDefault})` },
    { flags: '--after <mark>', says: 'go on behind the `next` of an earlier answer' },
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    { run: 'ogee history --unit 031 --limit 5', says: 'The five newest records of unit 031.' },
    {
      run: 'ogee history --verdict out-of-reach --format csv',
      says: 'What was out of reach, for a spreadsheet.',
    },
  ],
  read: readHistory,
  run: history,
}

function readHistory(given: Given): Options {
  const { options } = given
  const query = readFilters(options)
  const after = text(options.after)
  if (after !== undefined) query.after = after
  const limit = wholeNumber('--limit', text(options.limit) ?? String(limits.pageDefault), 1, 1_000_000)
  return { ...readConnection(given), query, limit }
}

async function history(options: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  if (context.format === 'csv' || context.format === 'ndjson') return await stream(client, options, context)
  const items: RecordLine[] = []
  let next: string | null = null
  for await (const page of historyPages(client, options)) {
    items.push(...page.items)
    next = page.next
  }
  await print(rendering(items, next), context)
  return 0
}

/** Page by page, so that a long history needs no more memory than a short one, and stops when the reader has gone. */
async function stream(client: Client, options: Options, { io, format }: Context): Promise<number> {
  let isFirst = true
  for await (const { items } of historyPages(client, options)) {
    const text = render(rendering(items, null), format, false)
    const headless = format === 'csv' && !isFirst ? text.slice(text.indexOf('\n') + 1) : text
    if (!(await io.write(headless))) return 0
    isFirst = false
  }
  return 0
}

function rendering(items: readonly RecordLine[], next: string | null): Rendering {
  const columns = [
    'Record',
    'Recorded',
    'Unit',
    'Ch',
    'Range',
    'Kind',
    'Pass',
    'Verdict',
    'Gain',
    'Offset',
    'Worst LSB',
    'Station',
  ]
  const isRight = (i: number) => i === 0 || i === 6 || (i >= 8 && i <= 10)
  return {
    json: { format: 'ogee.history/1', items, next },
    lines: items,
    table: () =>
      items.length === 0
        ? 'No record matches.\n'
        : textTable(
            columns.map((head, i) => ({ head, right: isRight(i) })),
            items.map((line) => [
              line.number,
              line.recordedAt.replace(/\.\d+/, ''),
              line.unit,
              line.channel,
              line.range,
              line.kind,
              line.pass,
              line.verdict,
              line.gainCode,
              line.offsetCode,
              line.worstLsb?.toFixed(3),
              line.station,
            ]),
          ),
    csv: { heads: recordHeads, rows: items.map(recordCells) },
  }
}

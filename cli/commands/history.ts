import type { InputOf } from '../../shared/contract/endpoint.ts'
import { outcome, verdict } from '../../shared/contract/primitives.ts'
import { type RecordLine, kind as recordKind } from '../../shared/contract/record.ts'
import { listTrims } from '../../shared/contract/trims.ts'
import { recordCells, recordHeads } from '../../shared/history/record-cells.ts'
import { limits } from '../../shared/limits.ts'
import type { Client } from '../client.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { print, type Rendering, render } from '../output.ts'
import {
  connect,
  oneOf,
  readConnection,
  serverAbout,
  serverOptions,
  text,
  wholeNumber,
} from '../server-options.ts'
import { textTable } from '../table.ts'

const verdicts = [...verdict.options, ...outcome.options]
type Options = ConnectionOptions & { query: InputOf<typeof listTrims>['query']; limit: number }

export const historyCommand: Command<Options> = {
  about: serverAbout,
  options: [
    { flags: '--unit <serial>', says: 'records of this unit' },
    { flags: '--serial <text>', says: 'of units whose serial, or a part of it, begins so' },
    { flags: '--lot <lots>', says: 'of these lots, separated by commas' },
    { flags: '--design <keys>', says: 'of these designs' },
    { flags: '--revision <number>', says: 'of this revision of the design' },
    { flags: '--station <names>', says: 'of these stations, by name or id' },
    { flags: '--by <ids>', says: 'recorded by these people or tokens' },
    { flags: '--kind <kind>', says: 'records of this kind', choices: recordKind.options },
    { flags: '--verdict <verdict>', says: 'records with this verdict', choices: verdicts },
    { flags: '--attempt <count>', says: 'measured at least so often on that day' },
    { flags: '--from <time>', says: 'since a day (UTC) or a time' },
    { flags: '--to <time>', says: 'until a day (UTC, whole) or a time' },
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

/** Passed on as they were typed: the contract says what each may be. */
const plainFilters = ['unit', 'serial', 'lot', 'design', 'station', 'by', 'from', 'to', 'after'] as const

function readHistory(given: Given): Options {
  const { options } = given
  const query: Options['query'] = {}
  for (const name of plainFilters) {
    const value = text(options[name])
    if (value !== undefined) query[name] = value
  }
  for (const name of ['revision', 'attempt'] as const) {
    const value = text(options[name])
    if (value !== undefined) query[name] = wholeNumber(`--${name}`, value, 1, 1_000_000)
  }
  const [kind, found] = [text(options.kind), text(options.verdict)]
  if (kind !== undefined) query.kind = oneOf('--kind', kind, recordKind.options)
  if (found !== undefined) query.verdict = oneOf('--verdict', found, verdicts)
  const limit = wholeNumber('--limit', text(options.limit) ?? String(limits.pageDefault), 1, 1_000_000)
  return { ...readConnection(given), query, limit }
}

async function history(options: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  if (context.format === 'csv' || context.format === 'ndjson') return await stream(client, options, context)
  const items: RecordLine[] = []
  let next: string | null = null
  for await (const page of pages(client, options)) {
    items.push(...page.items)
    next = page.next
  }
  await print(rendering(items, next), context)
  return 0
}

/** Page by page, so that a long history needs no more memory than a short one, and stops when the reader has gone. */
async function stream(client: Client, options: Options, { io, format }: Context): Promise<number> {
  let isFirst = true
  for await (const { items } of pages(client, options)) {
    const text = render(rendering(items, null), format, false)
    const headless = format === 'csv' && !isFirst ? text.slice(text.indexOf('\n') + 1) : text
    if (!(await io.write(headless))) return 0
    isFirst = false
  }
  return 0
}

/** Follows the pages until there are enough records. */
async function* pages(client: Client, { query, limit }: Options) {
  let left = limit
  let { after } = query
  while (left > 0) {
    const asked = {
      ...query,
      limit: Math.min(limits.pageMax, left),
      ...(after === undefined ? {} : { after }),
    }
    const page = await client.call(listTrims, { query: asked })
    yield page
    if (page.next === null) return
    left -= page.items.length
    after = page.next
  }
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

import { outcome, verdict } from '../../shared/contract/primitives.ts'
import { type RecordLine, kind as recordKind } from '../../shared/contract/record.ts'
import { listTrims } from '../../shared/contract/trims.ts'
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
import { type Cell, textTable } from '../table.ts'

const verdicts = [...verdict.options, ...outcome.options]
type Filters = {
  unit?: string
  design?: string
  kind?: (typeof recordKind.options)[number]
  verdict?: (typeof verdicts)[number]
  after?: string
}
type Options = ConnectionOptions & { filters: Filters; limit: number }

export const historyCommand: Command<Options> = {
  about: serverAbout,
  options: [
    { flags: '--unit <serial>', says: 'records of this unit' },
    { flags: '--design <key>', says: 'records of this design' },
    { flags: '--kind <kind>', says: 'records of this kind', choices: recordKind.options },
    { flags: '--verdict <verdict>', says: 'records with this verdict', choices: verdicts },
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
  const filters: Filters = {}
  const [unit, design, after] = [text(options.unit), text(options.design), text(options.after)]
  if (unit !== undefined) filters.unit = unit
  if (design !== undefined) filters.design = design
  if (after !== undefined) filters.after = after
  const [kind, found] = [text(options.kind), text(options.verdict)]
  if (kind !== undefined) filters.kind = oneOf('--kind', kind, recordKind.options)
  if (found !== undefined) filters.verdict = oneOf('--verdict', found, verdicts)
  const limit = wholeNumber('--limit', text(options.limit) ?? String(limits.pageDefault), 1, 1_000_000)
  return { ...readConnection(given), filters, limit }
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
async function* pages(client: Client, { filters, limit }: Options) {
  let left = limit
  let after = filters.after
  while (left > 0) {
    const query = {
      ...filters,
      limit: Math.min(limits.pageMax, left),
      ...(after === undefined ? {} : { after }),
    }
    const page = await client.call(listTrims, { query })
    yield page
    if (page.next === null) return
    left -= page.items.length
    after = page.next
  }
}

const heads = [
  'number',
  'recorded_at',
  'unit',
  'channel',
  'range',
  'lot',
  'design',
  'revision',
  'kind',
  'pass',
  'verdict',
  'accepted',
  'gain_code',
  'offset_code',
  'gain_error_ppm',
  'offset_error_v',
  'worst_lsb',
  'station',
  'by',
  'record',
]
const row = (line: RecordLine): Cell[] => [
  line.number,
  line.recordedAt,
  line.unit,
  line.channel,
  line.range,
  line.lot,
  line.design,
  line.revision,
  line.kind,
  line.pass,
  line.verdict,
  String(line.accepted),
  line.gainCode,
  line.offsetCode,
  line.gainErrorPpm,
  line.offsetErrorV,
  line.worstLsb,
  line.station,
  line.by,
  line.id,
]

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
    csv: { heads, rows: items.map(row) },
  }
}

import { designDocument } from '../../../shared/contract/design.ts'
import { getLot, listLotUnits } from '../../../shared/contract/lots.ts'
import { limits } from '../../../shared/limits.ts'
import { type CodesRow, codesHeads, codesRows } from '../../../shared/lots/codes-table.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import { print, type Rendering, render, sayCaution } from '../../output.ts'
import { fetchRevision } from '../../revision.ts'
import { connect, serverAbout, serverOptions } from '../../server-options.ts'
import { textTable } from '../../table.ts'
import { designOption, type LotOptions, lotArgument, lotParamsOf, readLotOptions } from './lot-options.ts'

export const lotCodesCommand: Command<LotOptions> = {
  about:
    'A row for each channel and range that has accepted codes: the index, and the word in the part’s coding, decimal\n' +
    'and hexadecimal. Reference units, and those left out at sign-off, are not in it. Needs a token that may read the records of all stations. Ends with 12 when there are no codes.\n\n' +
    serverAbout,
  arguments: [lotArgument],
  options: [designOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee lot codes 2417 --format csv',
      says: 'The codes of every unit of lot 2417, for a spreadsheet.',
    },
  ],
  read: readLotOptions,
  run: lotCodes,
}

async function lotCodes(options: LotOptions, context: Context): Promise<number> {
  const client = await connect(options, context)
  const params = await lotParamsOf(client, options)
  const lot = await client.call(getLot, { params })
  const { bytes } = await fetchRevision(client, params.key, lot.revision)
  const design = designDocument.parse(JSON.parse(bytes.toString('utf8')))
  const leftOut = new Set(lot.signOff?.leftOut.map(({ unit }) => unit))
  const isStreamed = context.format === 'csv' || context.format === 'ndjson'
  const all: CodesRow[] = []
  let count = 0
  let isFirst = true
  for await (const units of pages(client, params)) {
    const rows = codesRows(design, units, leftOut)
    if (!isStreamed) all.push(...rows)
    else if (!(await write(rows, isFirst, context))) return 0
    count += rows.length
    isFirst = false
  }
  if (!isStreamed) await print(rendering(lot.key, lot.design, all), context)
  if (count > 0) sayCaution(context)
  else context.io.say(`ogee: lot ${lot.key} has no accepted codes.`)
  return count > 0 ? 0 : 12
}

type Params = { key: string; lot: string }

async function* pages(client: Client, params: Params) {
  let after: string | undefined
  do {
    const query = { limit: limits.pageMax, ...(after === undefined ? {} : { after }) }
    const page = await client.call(listLotUnits, { params, query })
    yield page.items
    after = page.next ?? undefined
  } while (after !== undefined)
}

/** Page by page, so that a long lot needs no more memory than a short one; false when the reader has gone. */
async function write(rows: readonly CodesRow[], isFirst: boolean, { io, format }: Context): Promise<boolean> {
  const text = render(rendering('', '', rows), format, false)
  return io.write(format === 'csv' && !isFirst ? text.slice(text.indexOf('\n') + 1) : text)
}

function rendering(lot: string, design: string, rows: readonly CodesRow[]): Rendering {
  const cells = rows.map((row) => codesHeads.map((head) => row[head]))
  return {
    json: { format: 'ogee.lot-codes/1', lot, design, codes: rows },
    lines: rows,
    table: () =>
      textTable(
        codesHeads.map((head) => ({ head: head.replaceAll('_', ' ') })),
        cells,
      ),
    csv: { heads: codesHeads, rows: cells },
  }
}

import { isOgeeError } from '../../../shared/errors.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import { print } from '../../output.ts'
import { places, Spool, type SpoolPlace } from '../../spool/folder.ts'
import { textTable } from '../../table.ts'

type Options = { folder: string }
type Line = {
  place: SpoolPlace
  file: string
  unit: string | null
  channel: string | null
  range: string | null
  kind: string | null
  verdict: string | null
  savedAt: string | null
  record: string | null
}

export const spoolListCommand: Command<Options> = {
  about:
    'pending: to be sent. sent: recorded, and kept until a later checkpoint of the ledger includes it. refused: not taken\n' +
    'by the server; the problem stands beside each. A refused file moved back to pending/ is tried again.',
  arguments: [{ name: '<folder>', says: 'spool folder' }],
  options: [],
  formats: everyFormat,
  examples: [{ run: 'ogee spool list spool', says: 'What is in the folder spool, in the order of writing.' }],
  read: ({ args }) => ({ folder: args[0] ?? '' }),
  run: list,
}

async function list({ folder }: Options, context: Context): Promise<number> {
  const spool = Spool.find(folder)
  const lines = places.flatMap((place) =>
    spool.names(place).flatMap((name) => lineOf(spool, place, name) ?? []),
  )
  const counts = Object.fromEntries(
    places.map((place) => [place, lines.filter((line) => line.place === place).length]),
  ) as Record<SpoolPlace, number>
  const columns = [
    'place',
    'unit',
    'channel',
    'range',
    'kind',
    'verdict',
    'savedAt',
    'record',
    'file',
  ] as const
  const cells = lines.map((line) => columns.map((column) => line[column]))
  await print(
    {
      json: { format: 'ogee.spool/1', folder, ...counts, entries: lines },
      lines,
      table: () => {
        const heads = columns.map((head) => ({ head }))
        const said = `${counts.pending} to be sent, ${counts.sent} sent and not yet proven, ${counts.refused} refused.`
        return `${lines.length === 0 ? '' : textTable(heads, cells)}${said}\n`
      },
      csv: { heads: [...columns.slice(0, 6), 'saved_at', 'record', 'file'], rows: cells },
    },
    context,
  )
  return 0
}

function lineOf(spool: Spool, place: SpoolPlace, name: string): Line | null {
  const file = spool.path(place, name)
  const none = {
    unit: null,
    channel: null,
    range: null,
    kind: null,
    verdict: null,
    savedAt: null,
    record: null,
  }
  try {
    const entry = spool.read(place, name)
    if (entry === null) return null
    const { printed, body, savedAt, sent } = entry
    const said = (value: unknown) => (typeof value === 'string' ? value : null)
    return {
      place,
      file,
      unit: body.unit,
      channel: said(printed.channel),
      range: said(printed.range),
      kind: body.kind ?? 'trim',
      verdict: sent ? sent.verdict : said(printed.verdict),
      savedAt,
      record: sent?.id ?? null,
    }
  } catch (error) {
    if (isOgeeError(error)) return { place, file, ...none }
    throw error
  }
}

import { postLot } from '../../../shared/contract/lot-acts.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { parseSerials } from '../../../shared/lots/serials.ts'
import { type Command, type Context, everyFormat, type Given } from '../../command.ts'
import { readText } from '../../files.ts'
import { text } from '../../option-values.ts'
import { print } from '../../output.ts'
import { readRevision } from '../../revision.ts'
import { connect, serverAbout, serverOptions } from '../../server-options.ts'
import { type LotOptions, lotArgument, readLotOptions } from './lot-options.ts'
import { lotRendering } from './lot-rendering.ts'

type Options = LotOptions & {
  design: string
  revision: number | 'released'
  expect: string | undefined
}

export const lotOpenCommand: Command<Options> = {
  about:
    'Opening the same lot again changes nothing, so that the command may be repeated; serials that are new are added.\n' +
    `A closed lot is never open again.\n\n${serverAbout}`,
  arguments: [lotArgument],
  options: [
    { flags: '--design <key>', says: 'design of the lot', required: true },
    { flags: '--revision <number>', says: 'revision of the design (default: the released one)' },
    {
      flags: '--expect <file>',
      says: 'serials that are expected: one a line, or the column unit of a CSV; - for standard input',
      completes: 'file',
    },
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee lot open 2417 --design DBS-A --expect serials.csv',
      says: 'Opens lot 2417 under the released revision and says which units belong to it.',
    },
  ],
  read: (given: Given) => {
    const revision = text(given.options.revision)
    return {
      ...readLotOptions(given),
      design: text(given.options.design) ?? '',
      revision: revision === undefined ? 'released' : readRevision(revision),
      expect: text(given.options.expect),
    }
  },
  run: openLot,
}

async function openLot(options: Options, context: Context): Promise<number> {
  const { lot, design, revision, expect } = options
  const expected = expect === undefined ? undefined : await readSerials(expect, context)
  const client = await connect(options, context)
  const body = { key: lot, design, revision, ...(expected === undefined ? {} : { expected }) }
  await print(lotRendering(await client.call(postLot, { body })), context)
  return 0
}

async function readSerials(path: string, { io }: Context): Promise<string[]> {
  const most = limits.lotExpectedMax
  const tooMany = () => new OgeeError('csv-too-large', `A lot expects at most ${most} units.`)
  const serials = parseSerials(await readText(io, path, limits.bodyMaxBytes, tooMany))
  if (serials.length > most) throw tooMany()
  return serials
}

import { getLot } from '../../../shared/contract/lots.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import { print } from '../../output.ts'
import { connect, serverAbout, serverOptions } from '../../server-options.ts'
import { designOption, type LotOptions, lotArgument, lotParamsOf, readLotOptions } from './lot-options.ts'
import { lotRendering } from './lot-rendering.ts'

export const lotShowCommand: Command<LotOptions> = {
  about:
    'Yield: of the units with records, reference units apart, those whose every channel and range has accepted codes\n' +
    'that are not too coarse and, where verified, a pass. Ends with 20 when units need a decision or are missing.\n\n' +
    serverAbout,
  arguments: [lotArgument],
  options: [designOption, ...serverOptions],
  formats: everyFormat,
  examples: [{ run: 'ogee lot show 2417', says: 'State, yield and what is missing.' }],
  read: readLotOptions,
  run: showLot,
}

async function showLot(options: LotOptions, context: Context): Promise<number> {
  const client = await connect(options, context)
  const lot = await client.call(getLot, { params: await lotParamsOf(client, options) })
  await print(lotRendering(lot), context)
  const isReady = lot.signedOff !== null || (lot.counts.undecided === 0 && lot.counts.missing === 0)
  return isReady ? 0 : 20
}

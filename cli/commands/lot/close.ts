import { postClose } from '../../../shared/contract/lot-acts.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import { print } from '../../output.ts'
import { connect, serverAbout, serverOptions } from '../../server-options.ts'
import { designOption, type LotOptions, lotArgument, lotParamsOf, readLotOptions } from './lot-options.ts'
import { lotRendering } from './lot-rendering.ts'

export const lotCloseCommand: Command<LotOptions> = {
  about:
    'A closed lot takes no further record and is never open again. Closing it again changes nothing. Signing off is\n' +
    `for an engineer, on the page of the lot.\n\n${serverAbout}`,
  arguments: [lotArgument],
  options: [designOption, ...serverOptions],
  formats: everyFormat,
  examples: [{ run: 'ogee lot close 2417', says: 'No further record goes into lot 2417.' }],
  read: readLotOptions,
  run: closeLot,
}

async function closeLot(options: LotOptions, context: Context): Promise<number> {
  const client = await connect(options, context)
  const lot = await client.call(postClose, { params: await lotParamsOf(client, options) })
  await print(lotRendering(lot), context)
  return 0
}

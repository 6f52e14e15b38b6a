import { proofFailsExit } from '../../../shared/contract/exit.ts'
import { getCheckpoint } from '../../../shared/contract/ledger.ts'
import { listKeys } from '../../../shared/contract/ledger-checkpoints.ts'
import { checkNote } from '../../../shared/ledger/check-proof.ts'
import type { Command, Context } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { createFile } from '../../files.ts'
import { crypto } from '../../ledger/crypto.ts'
import { keyFor, keyOption } from '../../ledger/key-options.ts'
import { text } from '../../option-values.ts'
import { connectOpen, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

type Options = ConnectionOptions & { key: string | undefined; output: string | undefined }

export const ledgerCheckpointCommand: Command<Options> = {
  about:
    'Prints the newest signed checkpoint, once its signature was checked: five lines to keep outside of the server. Ends\n' +
    `with 16 when the signature is not the ledger's. Needs no token.\n\n${serverAbout}`,
  options: [
    { flags: '--output <file>', says: 'write to a file instead of standard output', completes: 'file' },
    keyOption,
    ...serverOptions,
  ],
  formats: [],
  examples: [
    { run: 'ogee ledger checkpoint > checkpoint.txt', says: 'What to compare the ledger with, years later.' },
  ],
  read: (given) => ({
    ...readConnection(given),
    key: text(given.options.key),
    output: text(given.options.output),
  }),
  run: checkpoint,
}

async function checkpoint(options: Options, context: Context): Promise<number> {
  const client = await connectOpen(options, context)
  const key = await keyFor(options.key, client)
  const note = await client.call(getCheckpoint, {})
  const { items } = await client.call(listKeys, {})
  const checked = checkNote(
    crypto,
    note,
    key,
    items.flatMap(({ statement }) => statement ?? []),
  )
  if ('fault' in checked) {
    context.io.say(`ogee: ${checked.message}`)
    return proofFailsExit
  }
  if (options.output === undefined) await context.io.write(note)
  else await createFile(options.output, Buffer.from(note))
  return 0
}

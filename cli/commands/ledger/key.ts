import { getLedgerKey } from '../../../shared/contract/ledger.ts'
import type { Command, Context } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { keyOf } from '../../ledger/read-files.ts'
import { connectOpen, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

export const ledgerKeyCommand: Command<ConnectionOptions> = {
  about: `Prints the public key in force: one line to keep outside of the server, as ogee.pub. Needs no token.\n\n${serverAbout}`,
  options: serverOptions,
  formats: [],
  examples: [
    { run: 'ogee ledger key > kept.pub', says: 'Once, to check everything against it from then on.' },
  ],
  read: readConnection,
  run: printKey,
}

async function printKey(options: ConnectionOptions, context: Context): Promise<number> {
  const line = await (await connectOpen(options, context)).call(getLedgerKey, {})
  // What is no key is trouble here and not years later.
  keyOf(line, "The server's key")
  await context.io.write(line)
  return 0
}

import { getLedgerKey } from '../../shared/contract/ledger.ts'
import type { LedgerKey } from '../../shared/ledger/checkpoint.ts'
import type { Client } from '../client.ts'
import type { OptionSpec } from '../command.ts'
import { keyOf, readKey } from './read-files.ts'

export const keyOption: OptionSpec = {
  flags: '--key <file>',
  says: "the ledger's public key, kept from before (default: as the server says)",
  completes: 'file',
}

/** The key that is kept, or the one that the server says is in force: then the server is taken at its word. */
export async function keyFor(file: string | undefined, client: Client): Promise<LedgerKey> {
  if (file !== undefined) return await readKey(file)
  return keyOf(await client.call(getLedgerKey, {}), "The server's key")
}

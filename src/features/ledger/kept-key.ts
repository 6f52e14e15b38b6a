import * as z from 'zod'
import { readStored, writeStored } from '../../lib/storage.ts'

const kept = z.object({ key: z.string(), since: z.string() })
export type KeptKey = z.output<typeof kept>

const name = 'ledger.key'

/**
 * The ledger's public key as this browser first saw it: a server that signs with another one later is found out, unless it
 * shows that the old key signed the change.
 */
export function keptKey(offered: string): KeptKey {
  const before = kept.safeParse(readStored(name))
  if (before.success) return before.data
  const now = { key: offered.trim(), since: new Date().toISOString().slice(0, 10) }
  writeStored(name, now)
  return now
}

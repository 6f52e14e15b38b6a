import { OgeeError } from '../../shared/errors.ts'
import { keyName } from '../../shared/ledger/checkpoint.ts'
import { sameBytes } from '../../shared/ledger/hash.ts'
import type { Sql } from '../db/sql.ts'
import { sha256 } from './crypto.ts'
import type { Signer } from './signer.ts'

export type KeyInForce = { number: number; name: string; publicKey: Buffer }

/** The newest key; null before the first. */
export async function keyInForce(sql: Sql): Promise<KeyInForce | null> {
  const [key] = await sql.rows<KeyInForce>(
    'SELECT number, name, public_key AS publicKey FROM ledger_keys ORDER BY number DESC LIMIT 1',
  )
  return key ?? null
}

/** Refuses to sign with a key that another process has replaced: `ledger-key-differs`, which names both. */
export async function requireInForce(sql: Sql, signer: Signer): Promise<void> {
  const inForce = await keyInForce(sql)
  if (inForce && sameBytes(inForce.publicKey, signer.key.publicKey)) return
  const now = inForce ? keyName(sha256, inForce) : 'no key'
  throw new OgeeError(
    'ledger-key-differs',
    `The ledger is signed by ${now} now, and this server holds ${signer.keyName}: give it the new key file.`,
  )
}

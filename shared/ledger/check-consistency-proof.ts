import type { ConsistencyProof } from '../contract/proof.ts'
import type { Checkpoint } from './checkpoint.ts'
import { checkConsistency } from './consistency.ts'
import { fromHex, type LedgerCrypto } from './hash.ts'

/**
 * Whether an answer of `GET /ledger/consistency` shows that one signed checkpoint is the beginning of another.
 *
 * @param crypto SHA-256.
 * @param older checkpoint whose signature was checked.
 * @param newer checkpoint whose signature was checked; over fewer entries, it has lost some.
 * @param proof the answer; null where none is needed, as for an empty older ledger or a shorter newer one.
 * @returns null when it does, else what is wrong, in a sentence.
 * Throws nothing.
 * Source: RFC 9162 section 2.1.4.2.
 * @example consistencyFault(crypto, older, newer, proof) // null
 */
export function consistencyFault(
  crypto: LedgerCrypto,
  older: Checkpoint,
  newer: Checkpoint,
  proof: ConsistencyProof | null,
): string | null {
  if (older.origin !== newer.origin) return `They are of two ledgers, ${older.origin} and ${newer.origin}.`
  if (older.size > newer.size)
    return `The ledger has ${newer.size} entries; ${older.size} were signed before: its end was cut off.`
  // Nothing is the beginning of everything.
  if (older.size === 0) return null
  const path = proof?.path.map(fromHex) ?? []
  const isWhole = path.every((hash) => hash !== null)
  if (isWhole && checkConsistency(crypto.sha256, older, newer, path as Uint8Array[])) return null
  return `The ledger of ${newer.size} entries does not begin with that of ${older.size}: history was rewritten.`
}

import type { StoredRow } from '../../contract/ledger-entries.ts'
import type { Json } from '../canonical.ts'
import type { LedgerKey } from '../checkpoint.ts'
import { fromBase64, type Sha256 } from '../hash.ts'
import { noticesHash, signedBytes } from '../receipt.ts'

/** A signature that somebody has to check: that takes longest, and can be done aside. */
export type SignatureTask = {
  entry: number
  record: string
  publicKey: Uint8Array
  bytes: Uint8Array
  signature: Uint8Array
}

/**
 * What must be signed for the receipt of a record to be good.
 *
 * @param sha256 the hash function.
 * @param keys of the ledger, by their short names.
 * @param row the record's, as stored.
 * @param entry its place, and the hash of its leaf, lower-case hexadecimal.
 * @returns the signature to check, or, in a sentence, why there is none.
 * Throws nothing.
 * Source: contract.md, Ledger.
 * @example signedInReceipt(sha256, new Map(), row, { index: 7, hash }) // { wrong: 'Entry 7, record …' }
 */
export function signedInReceipt(
  sha256: Sha256,
  keys: ReadonlyMap<string, LedgerKey>,
  row: StoredRow,
  { index, hash }: { index: number; hash: string },
): SignatureTask | { wrong: string } {
  const at = `Entry ${index}, record ${row.number}`
  const key = keys.get(row.receipt.key)
  const signature = fromBase64(row.receipt.signature)
  if (!key || signature?.length !== 64) {
    return { wrong: `${at}: ${row.receipt.key}, named by its receipt, is no key of the ledger.` }
  }
  const notices = noticesIn(row)
  if (notices === null) return { wrong: `${at}: its notices are no list.` }
  const promised = {
    record: row.id,
    leaf: hash,
    recordedAt: row.recordedAt,
    notices: noticesHash(sha256, notices),
  }
  const bytes = signedBytes(promised, row.receipt.key)
  return { entry: index, record: row.id, publicKey: key.publicKey, bytes, signature }
}

function noticesIn({ notices }: StoredRow): Json[] | null {
  if (notices === '[]') return []
  try {
    const parsed: unknown = JSON.parse(notices)
    return Array.isArray(parsed) ? (parsed as Json[]) : null
  } catch {
    return null
  }
}

import type { Receipt } from '../contract/receipt.ts'
import { canonicalBytes, type Json } from './canonical.ts'
import { keyName, type LedgerKey } from './checkpoint.ts'
import { fromBase64, type Sha256, type Sign, toBase64, toHex, type Verify } from './hash.ts'

/** Milliseconds after which a receipt's record must be in the ledger. The aim is one second. */
const promiseMs = 60_000

export type Promised = {
  record: string
  leaf: string
  recordedAt: string
  /** Of the notices given with the record, as `noticesHash` makes it. */
  notices?: string | undefined
}

/**
 * What a receipt says of the notices that were given with a record: they stand in no leaf, and are as hard to change.
 *
 * @param sha256 the hash function.
 * @param notices as given; what is said about a record later is not among them.
 * @returns lower-case hexadecimal, or undefined when there are none.
 * @throws as `canonicalText`, for what JSON cannot say.
 * Source: contract.md, Ledger; RFC 8785.
 * @example noticesHash(sha256, []) // undefined
 */
export function noticesHash(sha256: Sha256, notices: readonly Json[]): string | undefined {
  return notices.length === 0 ? undefined : toHex(sha256(canonicalBytes(notices)))
}

/**
 * A signed receipt: the server's promise, which somebody else keeps, that a record will be in the ledger.
 *
 * @param promised record id, leaf hash in hex, time of recording (ISO 8601 with Z), hash of the notices if any.
 * @param key short name of the key whose signature it is, as `keyName` makes it.
 * @param sign Ed25519 under that key.
 * @returns the receipt; `includedBy` is 60 s after `recordedAt`.
 * Throws nothing of its own.
 * Source: contract.md, Ledger; RFC 8785 for the signed bytes; RFC 8032 for the signature.
 * @example signReceipt(promised, name, sign).format // 'ogee.receipt/1'
 */
export function signReceipt(promised: Promised, key: string, sign: Sign): Receipt {
  const rest = unsigned(promised, key)
  return { ...rest, signature: toBase64(sign(canonicalBytes(rest))) }
}

/**
 * Puts a receipt together again from what is stored of it.
 *
 * @param promised as it was signed.
 * @param key short name of the signing key.
 * @param signature 64 bytes.
 * @returns the very receipt that was given out.
 * Throws nothing.
 * Source: contract.md, Ledger.
 * @example restoreReceipt(promised, name, bytes).key // name
 */
export function restoreReceipt(promised: Promised, key: string, signature: Uint8Array): Receipt {
  return { ...unsigned(promised, key), signature: toBase64(signature) }
}

/**
 * The bytes that a receipt's signature is over.
 *
 * @param promised as it was signed.
 * @param key short name of the signing key.
 * @returns RFC 8785 of the receipt without its signature.
 * Throws nothing for what a server promised.
 * Source: contract.md, Ledger; RFC 8785.
 * @example verify(publicKey, signedBytes(promised, name), signature)
 */
export function signedBytes(promised: Promised, key: string): Uint8Array {
  return canonicalBytes(unsigned(promised, key))
}

/**
 * Whether a receipt was signed by a key.
 *
 * @param sha256 the hash function.
 * @param receipt as received.
 * @param key the verifier key.
 * @param verify Ed25519.
 * @returns true when key name and signature fit.
 * Throws nothing.
 * Source: RFC 8032.
 * @example checkReceipt(sha256, { ...receipt, leaf: other }, key, verify) // false
 */
export function checkReceipt(sha256: Sha256, receipt: Receipt, key: LedgerKey, verify: Verify): boolean {
  const { signature, ...rest } = receipt
  const bytes = fromBase64(signature)
  if (bytes?.length !== 64 || receipt.key !== keyName(sha256, key)) return false
  return verify(key.publicKey, canonicalBytes(rest), bytes)
}

function unsigned({ record, leaf, recordedAt, notices }: Promised, key: string): Omit<Receipt, 'signature'> {
  const includedBy = new Date(Date.parse(recordedAt) + promiseMs).toISOString()
  const promised = { format: 'ogee.receipt/1', record, leaf, recordedAt, includedBy } as const
  return notices === undefined ? { ...promised, key } : { ...promised, notices, key }
}

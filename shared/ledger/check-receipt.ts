import type { KeyStatement } from '../contract/proof.ts'
import type { Receipt } from '../contract/receipt.ts'
import { checkProof, type ProofFault } from './check-proof.ts'
import type { LedgerKey } from './checkpoint.ts'
import type { LedgerCrypto } from './hash.ts'
import { keysFrom } from './key-chain.ts'
import { checkReceipt } from './receipt.ts'

/** `receipt`: not signed by the ledger. `other`: the proof is about something else. `missing`: nothing proves it. */
export type ReceiptFault = ProofFault | 'receipt' | 'other' | 'missing'

export type CheckedReceipt =
  | { ok: true; index: number; size: number }
  | { ok: false; fault: ReceiptFault; message: string }

/**
 * Whether a receipt is the ledger's and its record stands in the ledger: what a station waits for before it forgets a unit.
 *
 * @param crypto SHA-256 and Ed25519.
 * @param receipt as it was given out and kept.
 * @param proof what `GET /ledger/proof/:recordId` answers later.
 * @param key the verifier key that is kept.
 * @returns the place in the ledger, or what is wrong, in a sentence.
 * Throws nothing.
 * Source: contract.md, Ledger.
 * @example checkIncluded(crypto, receipt, {}, key).ok // false
 */
export function checkIncluded(
  crypto: LedgerCrypto,
  receipt: Receipt,
  proof: unknown,
  key: LedgerKey,
): CheckedReceipt {
  const checked = checkProof(crypto, proof, key)
  if (!checked.ok) return checked
  const { leaf, keys } = proof as { leaf: string; keys?: readonly KeyStatement[] }
  const isOurs = keysFrom(crypto, key, keys ?? []).some((one) =>
    checkReceipt(crypto.sha256, receipt, one, crypto.verify),
  )
  if (!isOurs) return bad('receipt', 'The receipt is not signed by the ledger.')
  if (receipt.leaf !== leaf || receipt.record !== checked.recordId) {
    return bad('other', 'The record in the ledger is not the one that the receipt is about.')
  }
  return { ok: true, index: checked.index, size: checked.checkpoint.size }
}

const bad = (fault: ReceiptFault, message: string) => ({ ok: false, fault, message }) as const

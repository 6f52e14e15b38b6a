import * as z from 'zod'
import { instant, recordId } from '../contract/primitives.ts'
import { proof as proofSchema } from '../contract/proof.ts'
import { type Checkpoint, checkCheckpoint, keyName, type LedgerKey, signerNames } from './checkpoint.ts'
import { fromBase64, fromHex, type LedgerCrypto, sameBytes } from './hash.ts'
import { keysFrom } from './key-chain.ts'
import { leafBytes, leafHash } from './leaf.ts'
import { rootFromInclusion } from './proof.ts'

/** What is wrong with a proof: its form, the record's bytes, the signature, the key, or the way to the root. */
export type ProofFault = 'form' | 'record' | 'key' | 'signature' | 'path'

export type CheckedProof =
  | {
      ok: true
      /** Canonical text of the record, exactly as hashed. */
      record: string
      recordId: string
      recordedAt: string
      index: number
      checkpoint: Checkpoint
      /** Short name of the key that signed the checkpoint. */
      signedBy: string
    }
  | { ok: false; fault: ProofFault; message: string }

const inRecord = z.object({ id: recordId, recordedAt: instant })

/**
 * Whether a proof shows that its record stands in the ledger under a signed root. Needs nothing but the key.
 *
 * @param crypto SHA-256 and Ed25519.
 * @param document what a proof file holds, of any form.
 * @param key the verifier key that is kept; a later or earlier key of the same ledger is accepted when the proof carries
 * the changes, signed by both keys of each.
 * @returns the record, its index and the checkpoint; or what is wrong, in a sentence.
 * Throws nothing.
 * Source: contract.md, Ledger; RFC 9162 section 2.1.3.2; C2SP tlog-checkpoint.
 * @example checkProof(crypto, {}, key).ok // false
 */
export function checkProof(crypto: LedgerCrypto, document: unknown, key: LedgerKey): CheckedProof {
  const parsed = proofSchema.safeParse(document)
  if (!parsed.success) return bad('form', 'This is no proof of format ogee.proof/1.')
  const { leaf, index, path, checkpoint: note, keys = [] } = parsed.data
  const read = readRecord(parsed.data.record)
  if (!read) return bad('form', 'The proof holds no record.')
  const hash = leafHash(crypto.sha256, leafBytes('record', read.recordedAt, read.bytes))
  if (!sameBytes(hash, fromHex(leaf)!)) return bad('record', 'The record is not the one that was hashed.')
  const signed = checkNote(crypto, note, key, keys)
  if ('fault' in signed) return signed
  const { checkpoint, signedBy } = signed
  const hashes = path.map((text) => fromHex(text)!)
  const root = rootFromInclusion(crypto.sha256, hash, index, checkpoint.size, hashes)
  if (!root || !sameBytes(root, checkpoint.root)) {
    return bad('path', 'The leaf does not lead to the signed root.')
  }
  const { text, id, recordedAt } = read
  return { ok: true, record: text, recordId: id, recordedAt, index, checkpoint, signedBy }
}

/**
 * Whether a checkpoint is signed by the key that is kept, or by one that it leads to.
 *
 * @param crypto SHA-256 and Ed25519.
 * @param note the signed note.
 * @param key the verifier key that is kept.
 * @param changes of the key, as proofs carry them.
 * @returns the checkpoint and the short name of the signing key; or what is wrong.
 * Throws nothing.
 * Source: C2SP tlog-checkpoint and signed-note.
 * @example 'fault' in checkNote(crypto, 'nonsense', key, []) // true
 */
export function checkNote(
  crypto: LedgerCrypto,
  note: string,
  key: LedgerKey,
  changes: Parameters<typeof keysFrom>[2],
): { checkpoint: Checkpoint; signedBy: string } | Extract<CheckedProof, { ok: false }> {
  const trusted = keysFrom(crypto, key, changes)
  for (const one of trusted) {
    const checkpoint = checkCheckpoint(crypto.sha256, note, one, crypto.verify)
    if (checkpoint) return { checkpoint, signedBy: keyName(crypto.sha256, one) }
  }
  const claimed = signerNames(note)
  const ours = new Set(trusted.map((one) => keyName(crypto.sha256, one)))
  if (claimed.length > 0 && !claimed.some((name) => ours.has(name))) {
    return bad('key', 'Signed with another key than the one kept here.')
  }
  return bad('signature', 'The checkpoint is not signed by the ledger.')
}

function readRecord(
  base64: string,
): { bytes: Uint8Array; text: string; id: string; recordedAt: string } | null {
  const bytes = fromBase64(base64)
  if (!bytes) return null
  try {
    const text = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes)
    const parsed = inRecord.safeParse(JSON.parse(text))
    return parsed.success ? { bytes, text, ...parsed.data } : null
  } catch {
    return null
  }
}

const bad = (fault: ProofFault, message: string) => ({ ok: false, fault, message }) as const

import type { Proof } from '../../../shared/contract/proof.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { canonicalText } from '../../../shared/ledger/canonical.ts'
import { type CheckedProof, checkProof } from '../../../shared/ledger/check-proof.ts'
import { parseVerifierKey } from '../../../shared/ledger/checkpoint.ts'
import { fromHex } from '../../../shared/ledger/hash.ts'
import { withCrypto } from '../../lib/ledger-crypto.ts'
import { sha256 } from '../../lib/sha256.ts'
import type { KeptKey } from './kept-key.ts'
import { type ProofStep, proofSteps } from './proof-steps.ts'

export type RecordCheck =
  | { ok: true; checked: Extract<CheckedProof, { ok: true }>; steps: ProofStep[]; kept: KeptKey }
  | { ok: false; message: string; kept: KeptKey }

/** Whether the record as this page shows it stands in the ledger, by the key that this browser keeps. */
export async function checkRecord(record: TrimRecord, proof: Proof, kept: KeptKey): Promise<RecordCheck> {
  const key = parseVerifierKey(sha256, kept.key)
  if (!key) return { ok: false, message: 'The key that is kept here cannot be read.', kept }
  const checked = await withCrypto((crypto) => checkProof(crypto, proof, key))
  if (!checked.ok) {
    const message =
      checked.fault === 'key' ? 'Signed with another key than the one kept here.' : checked.message
    return { ok: false, message, kept }
  }
  const { receipt: _, ledger: __, notices: ___, ...body } = record
  if (canonicalText(body as never) !== checked.record) {
    return { ok: false, message: 'The record that the server shows is not the one in the ledger.', kept }
  }
  const path = proof.path.map((hash) => fromHex(hash)!)
  return {
    ok: true,
    checked,
    steps: proofSteps(sha256, fromHex(proof.leaf)!, proof.index, checked.checkpoint.size, path),
    kept,
  }
}

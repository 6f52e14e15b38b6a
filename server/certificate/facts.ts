import type { CodesDocument } from '../../shared/contract/codes.ts'
import type { Design } from '../../shared/contract/design.ts'
import type { Proof } from '../../shared/contract/proof.ts'
import type { Notice, RecordBody } from '../../shared/contract/record.ts'
import type { VerifyDocument } from '../../shared/contract/verify.ts'

export type Trim = RecordBody & { result: CodesDocument }
export type Verification = RecordBody & { result: VerifyDocument }

/** All that a certificate of one unit, channel and range says; what it lacks is null, and said to be missing. */
export type CertificateFacts = {
  /** The record that the certificate was asked for. */
  subject: RecordBody
  /** Measured before any trim of this chain. */
  found: Trim | null
  /** The trim whose codes were given out last. */
  trim: Trim | null
  /** Measured with those codes loaded. */
  left: Verification | null
  design: Design
  revision: {
    releasedBy: string | null
    releasedAt: string | null
    releasedByAuthor: boolean
    withdrawnAt: string | null
  }
  notices: readonly Notice[]
  /** An engineer's reason to take codes of a suspect trim. */
  override: { number: number; by: string; reason: string } | null
  /** Proofs of the records above, the subject's first. */
  proofs: readonly { number: number; proof: Proof }[]
}

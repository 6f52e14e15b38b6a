import * as z from 'zod'
import { instant, recordId, sha256Hex } from './primitives.ts'

/** `ogee.receipt/1`: the server's signed promise that the record will be in the ledger by `includedBy`. */
export const receipt = z
  .object({
    format: z.literal('ogee.receipt/1'),
    record: recordId,
    leaf: sha256Hex,
    recordedAt: instant,
    includedBy: instant,
    notices: sha256Hex
      .optional()
      .describe('SHA-256 of the RFC 8785 form of the notices given with it; absent when there were none'),
    key: z.string().describe('Name and hash of the signing key, as in the checkpoint'),
    signature: z.string().describe('Ed25519 over the RFC 8785 form of the rest, base64'),
  })
  .meta({ id: 'Receipt' })
export type Receipt = z.output<typeof receipt>

import * as z from 'zod'
import { sha256Hex } from './primitives.ts'

/** Documents that somebody keeps to check the ledger without its server (contract.md, Ledger). */

const base64 = z.string().regex(/^[A-Za-z0-9+/]*={0,2}$/)
const treeSize = z.int().nonnegative()
/** A tree of 2^53 leaves needs 53. */
const hashes = z.array(sha256Hex).max(64)

/** `ogee.key/1`: one key takes the place of another, and both sign that; the first key replaces none. */
export const keyStatement = z
  .object({
    format: z.literal('ogee.key/1'),
    key: z.string().describe('Verifier key, as in ogee.pub'),
    replaces: z.string().nullable().describe('Verifier key that was in force before'),
    signatures: z
      .object({ replaced: base64, replacing: base64 })
      .optional()
      .describe('Ed25519 of both keys over the RFC 8785 form of the rest'),
  })
  .meta({ id: 'KeyStatement' })
export type KeyStatement = z.output<typeof keyStatement>

/** `ogee.proof/1`: a record and the way from its leaf to a signed root. */
export const proof = z
  .object({
    format: z.literal('ogee.proof/1'),
    record: base64.describe('Canonical bytes of the record'),
    leaf: sha256Hex,
    index: treeSize,
    path: hashes.describe('From the leaf up'),
    checkpoint: z.string().describe('Signed note'),
    keys: z
      .array(keyStatement)
      .optional()
      .describe('Changes of the key, oldest first, so that whoever keeps an older key can check'),
  })
  .meta({ id: 'Proof' })
export type Proof = z.output<typeof proof>

const treeHead = z.object({ size: treeSize, root: sha256Hex })

/** `ogee.consistency/1`: the older tree is the beginning of the newer one. */
export const consistencyProof = z
  .object({
    format: z.literal('ogee.consistency/1'),
    from: treeHead,
    to: treeHead,
    path: hashes,
  })
  .meta({ id: 'ConsistencyProof' })
export type ConsistencyProof = z.output<typeof consistencyProof>

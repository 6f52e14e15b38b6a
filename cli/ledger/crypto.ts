import { createHash, createPublicKey, type KeyObject, verify as verifySignature } from 'node:crypto'
import type { LedgerCrypto } from '../../shared/ledger/hash.ts'

/** DER of an Ed25519 public key is this and the 32 bytes (RFC 8410). */
const spkiStart = Buffer.from('302a300506032b6570032100', 'hex')
/** A ledger has few keys, and making one ready takes as long as a check of its signature. */
const ready = new Map<string, KeyObject>()

/** An Ed25519 key of Node's from its 32 bytes. */
export function publicKeyOf(raw: Uint8Array): KeyObject {
  const name = Buffer.from(raw).toString('hex')
  const known = ready.get(name)
  if (known) return known
  const made = createPublicKey({ key: Buffer.concat([spkiStart, raw]), type: 'spki', format: 'der' })
  ready.set(name, made)
  return made
}

/** SHA-256 and Ed25519 of Node, as the shared checks want them. */
export const crypto: LedgerCrypto = {
  sha256: (bytes) => createHash('sha256').update(bytes).digest(),
  verify: (publicKey, bytes, signature) => verifySignature(null, bytes, publicKeyOf(publicKey), signature),
}

import { createPublicKey, hash, type KeyObject, verify as verifySignature } from 'node:crypto'
import type { Sha256, Verify } from '../../shared/ledger/hash.ts'

export const sha256: Sha256 = (bytes) => hash('sha256', bytes, 'buffer')

/** DER of an Ed25519 public key is this and the 32 bytes (RFC 8410). */
const spkiStart = Buffer.from('302a300506032b6570032100', 'hex')

export function rawPublicKey(key: KeyObject): Uint8Array {
  const der = createPublicKey(key).export({ type: 'spki', format: 'der' })
  return der.subarray(spkiStart.length)
}

export const verifyEd25519: Verify = (publicKey, bytes, signature) => {
  const key = createPublicKey({ key: Buffer.concat([spkiStart, publicKey]), type: 'spki', format: 'der' })
  return verifySignature(null, bytes, key, signature)
}

import { createPublicKey, hash, type KeyObject, verify as verifySignature } from 'node:crypto'
import type { BytesAsText } from '../../shared/ledger/check/at-sight.ts'
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

/** Hashes come by the million: in one call, and without a Buffer each, they take a third of the time for the small ones. */
function oneEach(text: string): Uint8Array {
  const bytes = new Uint8Array(text.length)
  for (let i = 0; i < bytes.length; i++) bytes[i] = text.charCodeAt(i)
  return bytes
}

/** SHA-256 and Ed25519 of Node, as the shared checks want them. */
export const crypto: LedgerCrypto = {
  sha256: (bytes) => oneEach(hash('sha256', bytes, 'binary')),
  verify: (publicKey, bytes, signature) => verifySignature(null, bytes, publicKeyOf(publicKey), signature),
}

/** Bytes as text, one character for each, as the check of a whole ledger wants them. */
export const asText: BytesAsText = ({ buffer, byteOffset, length }) =>
  Buffer.from(buffer, byteOffset, length).toString('latin1')

import { generateKeyPairSync, sign as signBytes } from 'node:crypto'
import { rawPublicKey } from '../../server/ledger/crypto.ts'
import type { LedgerKey } from '../../shared/ledger/checkpoint.ts'
import type { Sign } from '../../shared/ledger/hash.ts'

/** A fresh Ed25519 key for tests. */
export function testKey(name = 'test.example/ledger'): { key: LedgerKey; sign: Sign } {
  const { privateKey } = generateKeyPairSync('ed25519')
  return {
    key: { name, publicKey: Uint8Array.from(rawPublicKey(privateKey)) },
    sign: (bytes) => signBytes(null, bytes, privateKey),
  }
}

export const hex = (text: string): Uint8Array => Buffer.from(text, 'hex')
export const utf8 = (text: string): Uint8Array => new TextEncoder().encode(text)

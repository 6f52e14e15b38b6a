import { type KeyObject, sign as signBytes } from 'node:crypto'
import { keyName, type LedgerKey } from '../../shared/ledger/checkpoint.ts'
import type { Sign } from '../../shared/ledger/hash.ts'
import { rawPublicKey, sha256 } from './crypto.ts'

/** The ledger's key at work: who signs, and how. */
export type Signer = {
  key: LedgerKey
  /** `<name>+<hash>`, as receipts carry it. */
  keyName: string
  sign: Sign
  /** Why nothing may be signed: the key was replaced elsewhere, and the new one is not here. */
  fault: string | null
}

export function signerOf(name: string, privateKey: KeyObject): Signer {
  const key = { name, publicKey: rawPublicKey(privateKey) }
  return {
    key,
    keyName: keyName(sha256, key),
    sign: (bytes) => signBytes(null, bytes, privateKey),
    fault: null,
  }
}

import type { LedgerCrypto } from '../../shared/ledger/hash.ts'
import { sha256 } from './sha256.ts'

/** Thrown where the browser has no Ed25519, or the page is not one that it trusts with it. */
export class NoSignatures extends Error {}

/**
 * Runs a check of the ledger with the browser's own Ed25519, which answers only later: first the check runs to learn which
 * signatures it asks about, taking each for good; those are verified; then it runs again with the true answers.
 */
export async function withCrypto<Checked>(check: (crypto: LedgerCrypto) => Checked): Promise<Checked> {
  const answers = new Map<string, Promise<boolean>>()
  check({
    sha256,
    verify: (publicKey, bytes, signature) => {
      const asked = keyOf(publicKey, bytes, signature)
      if (!answers.has(asked)) answers.set(asked, verify(publicKey, bytes, signature))
      return true
    },
  })
  const known = new Map<string, boolean>()
  for (const [asked, answer] of answers) known.set(asked, await answer)
  return check({
    sha256,
    // What was not asked the first time is not known to be good.
    verify: (publicKey, bytes, signature) => known.get(keyOf(publicKey, bytes, signature)) ?? false,
  })
}

const keyOf = (...parts: readonly Uint8Array[]) => parts.map((part) => part.join(',')).join(';')

async function verify(publicKey: Uint8Array, bytes: Uint8Array, signature: Uint8Array): Promise<boolean> {
  // Absent on a page that is neither local nor over TLS.
  const { subtle } = globalThis.crypto as { subtle?: SubtleCrypto }
  if (!subtle) throw new NoSignatures('This page is not over TLS, so the browser checks no signatures here.')
  const algorithm = { name: 'Ed25519' }
  const key = await subtle
    .importKey('raw', Uint8Array.from(publicKey), algorithm, false, ['verify'])
    .catch((cause: unknown) => {
      throw new NoSignatures('This browser knows no Ed25519.', { cause })
    })
  return subtle.verify(algorithm, key, Uint8Array.from(signature), Uint8Array.from(bytes))
}

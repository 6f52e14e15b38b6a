/**
 * Hashing and signing are handed in: node:crypto on the server and the command line, a library in the browser.
 * All functions are pure; bytes handed in are never changed.
 */

/** SHA-256 (FIPS 180-4) of a byte string, 32 bytes. */
export type Sha256 = (bytes: Uint8Array) => Uint8Array

/** Ed25519 (RFC 8032) under a fixed key of a byte string, 64 bytes. */
export type Sign = (bytes: Uint8Array) => Uint8Array

/** True when the 64-byte signature is that of the 32-byte public key over the bytes. */
export type Verify = (publicKey: Uint8Array, bytes: Uint8Array, signature: Uint8Array) => boolean

/** What checking needs: handed in together. */
export type LedgerCrypto = { sha256: Sha256; verify: Verify }

/** Joins byte strings. */
export function joinBytes(...parts: readonly Uint8Array[]): Uint8Array {
  let length = 0
  for (const part of parts) length += part.length
  const joined = new Uint8Array(length)
  let at = 0
  for (const part of parts) {
    joined.set(part, at)
    at += part.length
  }
  return joined
}

/** True when both hold the same bytes. Not constant in time: hashes of the ledger are no secrets. */
export function sameBytes(a: Uint8Array, b: Uint8Array): boolean {
  return a.length === b.length && a.every((byte, i) => byte === b[i])
}

const hexOf = Array.from({ length: 256 }, (_, byte) => byte.toString(16).padStart(2, '0'))

/** Lower-case hexadecimal digits of bytes. */
export function toHex(bytes: Uint8Array): string {
  let text = ''
  // By index: an iterator takes half as long again, and every hash comes through here.
  for (let i = 0; i < bytes.length; i++) text += hexOf[bytes[i]!]
  return text
}

/** Reads lower-case hexadecimal; null when the text is anything else. */
export function fromHex(text: string): Uint8Array | null {
  if (!/^(?:[0-9a-f]{2})*$/.test(text)) return null
  return Uint8Array.from({ length: text.length / 2 }, (_, i) =>
    Number.parseInt(text.slice(2 * i, 2 * i + 2), 16),
  )
}

/** Far below what any engine takes as arguments of one call. */
const argumentsMax = 4_096

/** Standard base64 with padding (RFC 4648 section 4). */
export function toBase64(bytes: Uint8Array): string {
  let binary = ''
  for (let from = 0; from < bytes.length; from += argumentsMax) {
    binary += String.fromCharCode(...bytes.subarray(from, from + argumentsMax))
  }
  return btoa(binary)
}

/** Reads standard base64; null when the text is not the one canonical encoding of its bytes. */
export function fromBase64(text: string): Uint8Array | null {
  if (!/^[A-Za-z0-9+/]*={0,2}$/.test(text) || text.length % 4 !== 0) return null
  const binary = atob(text)
  if (btoa(binary) !== text) return null
  const bytes = new Uint8Array(binary.length)
  for (let i = 0; i < bytes.length; i++) bytes[i] = binary.charCodeAt(i)
  return bytes
}

import { canonicalText, type Json } from './canonical.ts'
import { joinBytes, type Sha256 } from './hash.ts'

/** What a leaf can be about (contract.md, Ledger). */
export const leafKinds = [
  'record',
  'release',
  'withdrawal',
  'finding',
  'answer',
  'sign-off',
  'role',
  'token',
  'key',
] as const
export type LeafKind = (typeof leafKinds)[number]

const encoder = new TextEncoder()
/** A zero byte and room for the bytes of most leaves: making such room for each takes as long as hashing it. */
const prefixed = new Uint8Array(16 * 1024)

/**
 * The bytes of a leaf: RFC 8785 of `{ at, body, kind }`, put together from the stored bytes of the body, which are never
 * parsed and written again.
 *
 * @param kind what the leaf is about.
 * @param at when, ISO 8601 with milliseconds and Z.
 * @param body canonical bytes (RFC 8785) of the body, as stored.
 * @returns canonical bytes of the leaf; "at" < "body" < "kind" is the order RFC 8785 sorts into.
 * @throws `invalid-document` when `at` is not text that JSON can say.
 * Source: RFC 8785 section 3.2.3.
 * @example new TextDecoder().decode(leafBytes('key', '2026-01-02T03:04:05.678Z', new TextEncoder().encode('{}')))
 * // '{"at":"2026-01-02T03:04:05.678Z","body":{},"kind":"key"}'
 */
export function leafBytes(kind: LeafKind, at: string, body: Uint8Array): Uint8Array {
  const [before, after] = around(kind, at)
  return joinBytes(encoder.encode(before), body, encoder.encode(after))
}

const around = (kind: LeafKind, at: string) =>
  [`{"at":${canonicalText(at)},"body":`, `,"kind":${canonicalText(kind)}}`] as const

/**
 * A leaf to be, written once: what `leafBytes` and `leafHash` give for the canonical form of a body, without copies.
 *
 * @param sha256 the hash function.
 * @param kind what the leaf is about.
 * @param at when, ISO 8601 with milliseconds and Z: ASCII, as lengths of text and of bytes are taken for the same.
 * @param body what it says.
 * @returns the body's canonical text, the same as bytes (a part of a larger buffer), and the leaf's 32-byte hash.
 * @throws as `canonicalText`, for what JSON cannot say.
 * Source: RFC 8785 section 3.2.3; RFC 9162 section 2.1.1.
 * @example writeLeaf(sha256, 'key', '2026-01-02T03:04:05.678Z', {}).text // '{}'
 */
export function writeLeaf(
  sha256: Sha256,
  kind: LeafKind,
  at: string,
  body: Json,
): { text: string; bytes: Uint8Array; hash: Uint8Array } {
  const [before, after] = around(kind, at)
  const whole = `\0${before}${canonicalText(body)}${after}`
  const hashed = encoder.encode(whole)
  // A part of the one text that was put together for encoding: the pieces it was made from can go.
  const text = whole.slice(1 + before.length, whole.length - after.length)
  const bytes = hashed.subarray(1 + before.length, hashed.length - after.length)
  return { text, bytes, hash: sha256(hashed) }
}

/**
 * The hash of a leaf: SHA-256 of a zero byte and the leaf's bytes. The zero keeps leaves apart from inner nodes, which
 * begin with a one, so that no leaf can be passed off as a subtree.
 *
 * @param sha256 the hash function; of what it is handed it keeps nothing.
 * @param bytes the leaf's bytes, as from `leafBytes`.
 * @returns 32 bytes.
 * Throws nothing of its own.
 * Source: RFC 9162 section 2.1.1.
 * @example toHex(leafHash(sha256, new Uint8Array())) // '6e340b9c…' as published
 */
export function leafHash(sha256: Sha256, bytes: Uint8Array): Uint8Array {
  if (bytes.length >= prefixed.length) return sha256(joinBytes(prefixed.subarray(0, 1), bytes))
  prefixed.set(bytes, 1)
  return sha256(prefixed.subarray(0, bytes.length + 1))
}

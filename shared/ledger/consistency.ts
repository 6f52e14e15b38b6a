import { type Sha256, sameBytes } from './hash.ts'
import { nodeHash } from './tree.ts'

export type TreeHead = { size: number; root: Uint8Array }

/**
 * Whether a consistency proof shows that the older tree is the beginning of the newer one.
 *
 * @param sha256 the hash function.
 * @param older size at least 1, and root.
 * @param newer size and root.
 * @param proof hashes, as from `proofHashes(consistencyParts(…))`.
 * @returns true when the proof checks; false for every other input, malformed ones included.
 * Throws nothing.
 * Source: RFC 9162 section 2.1.4.2.
 * @example checkConsistency(sha256, head, head, []) // true
 */
export function checkConsistency(
  sha256: Sha256,
  older: TreeHead,
  newer: TreeHead,
  proof: readonly Uint8Array[],
): boolean {
  const sizes = [older.size, newer.size]
  if (!sizes.every(Number.isSafeInteger) || older.size < 1 || older.size > newer.size) return false
  if (older.size === newer.size) return proof.length === 0 && sameBytes(older.root, newer.root)
  // When the older tree is complete its root opens the path; the proof leaves it out.
  const path = isPowerOfTwo(older.size) ? [older.root, ...proof] : [...proof]
  const first = path[0]
  if (first === undefined) return false
  return foldsTo(sha256, older, newer, first, path.slice(1))
}

function foldsTo(
  sha256: Sha256,
  older: TreeHead,
  newer: TreeHead,
  first: Uint8Array,
  rest: readonly Uint8Array[],
): boolean {
  let node = older.size - 1
  let last = newer.size - 1
  while (node % 2 === 1) [node, last] = [half(node), half(last)]
  let oldHash = first
  let newHash = first
  for (const hash of rest) {
    if (last === 0) return false
    if (node % 2 === 1 || node === last) {
      oldHash = nodeHash(sha256, hash, oldHash)
      newHash = nodeHash(sha256, hash, newHash)
      while (node % 2 === 0 && node !== 0) [node, last] = [half(node), half(last)]
    } else {
      newHash = nodeHash(sha256, newHash, hash)
    }
    node = half(node)
    last = half(last)
  }
  return last === 0 && sameBytes(oldHash, older.root) && sameBytes(newHash, newer.root)
}

const half = (n: number) => Math.floor(n / 2)

function isPowerOfTwo(n: number): boolean {
  let power = 1
  while (power < n) power *= 2
  return power === n
}

import { type Sha256, toHex } from '../hash.ts'
import { nodeHash, rootOf } from '../tree.ts'

export type GrowingTree = {
  readonly size: number
  /**
   * Adds a leaf and compares the stored hashes of the subtrees that it completes.
   * @returns the level of the first that is stored otherwise, or null
   */
  add: (hash: Uint8Array, stored: string) => number | null
  root: () => Uint8Array
}

/**
 * A tree that grows leaf by leaf and is compared with stored hashes on the way; memory grows with the logarithm.
 *
 * @param sha256 the hash function.
 * @returns the empty tree.
 * Throws nothing of its own.
 * Source: RFC 9162 section 2.1.1.
 * @example growingTree(sha256).size // 0
 */
export function growingTree(sha256: Sha256): GrowingTree {
  const peaks: { level: number; hash: Uint8Array }[] = []
  let size = 0
  return {
    get size() {
      return size
    },
    add(leaf, stored) {
      let hash = leaf
      let level = 0
      let differs: number | null = null
      for (;;) {
        if (differs === null && stored.slice(level * 64, level * 64 + 64) !== toHex(hash)) differs = level
        const left = peaks.at(-1)
        if (left?.level !== level) break
        peaks.pop()
        hash = nodeHash(sha256, left.hash, hash)
        level++
      }
      peaks.push({ level, hash })
      size++
      return differs
    },
    root: () =>
      rootOf(
        sha256,
        peaks.map((peak) => peak.hash),
      ),
  }
}

import type { Sha256 } from './hash.ts'
import { type NodePlace, nodeHash, peakPlaces, rootOf } from './tree.ts'

/** One hash of a proof: a complete subtree, or the root of a ragged right part, folded from its complete subtrees. */
export type ProofPart = readonly NodePlace[]

/**
 * Which subtrees prove that a leaf stands at an index of a tree.
 *
 * @param index of the leaf, from 0.
 * @param size leaves of the tree, over `index`.
 * @returns the parts from the leaf up; fold each part's hashes by `rootOf` to get one hash of the path.
 * @throws RangeError when the leaf is not in the tree.
 * Source: RFC 9162 section 2.1.3.1. At most 53 parts, of at most 53 places together.
 * @example inclusionParts(0, 3) // [[{ level: 0, index: 1 }], [{ level: 0, index: 2 }]]
 */
export function inclusionParts(index: number, size: number): ProofPart[] {
  if (!(index >= 0 && index < size)) throw new RangeError(`Leaf ${index} is not in a tree of ${size}.`)
  return climb(0, size, index)
}

function climb(start: number, size: number, index: number): ProofPart[] {
  if (size === 1) return []
  const split = largestPowerBelow(size)
  return index < split
    ? [...climb(start, split, index), coverOf(start + split, size - split)]
    : [...climb(start + split, size - split, index - split), coverOf(start, split)]
}

/**
 * Which subtrees prove that a tree is the beginning of a larger one.
 *
 * @param from leaves of the older tree, at least 1.
 * @param to leaves of the newer tree, at least `from`.
 * @returns the parts in the order of the RFC; empty when the sizes are the same.
 * @throws RangeError when `from` is not within 1 to `to`.
 * Source: RFC 9162 section 2.1.4.1.
 * @example consistencyParts(2, 3) // [[{ level: 0, index: 2 }]]
 */
export function consistencyParts(from: number, to: number): ProofPart[] {
  if (!(from >= 1 && from <= to)) throw new RangeError(`No proof leads from ${from} to ${to}.`)
  return descend(0, from, to, true)
}

function descend(start: number, from: number, to: number, whole: boolean): ProofPart[] {
  // `whole`: the older root itself is this subtree, which the checker knows already.
  if (from === to) return whole ? [] : [coverOf(start, to)]
  const split = largestPowerBelow(to)
  return from <= split
    ? [...descend(start, from, split, whole), coverOf(start + split, to - split)]
    : [...descend(start + split, from - split, to - split, false), coverOf(start, split)]
}

/** The complete subtrees that cover `size` leaves from `start`, which is a multiple of a power of two over `size`. */
function coverOf(start: number, size: number): ProofPart {
  return peakPlaces(size).map(({ level, index }) => ({ level, index: start / 2 ** level + index }))
}

function largestPowerBelow(size: number): number {
  let power = 1
  while (power * 2 < size) power *= 2
  return power
}

/**
 * The hashes of a proof from its parts.
 *
 * @param sha256 the hash function.
 * @param parts as from `inclusionParts` or `consistencyParts`.
 * @param hashAt gives the hash of a complete subtree.
 * @returns one hash a part.
 * Throws what `hashAt` throws.
 * Source: RFC 9162 section 2.1.1.
 * @example proofHashes(sha256, [], () => new Uint8Array(32)) // []
 */
export function proofHashes(
  sha256: Sha256,
  parts: readonly ProofPart[],
  hashAt: (place: NodePlace) => Uint8Array,
): Uint8Array[] {
  return parts.map((part) => rootOf(sha256, part.map(hashAt)))
}

/**
 * The root that a leaf and its inclusion path lead to.
 *
 * @param sha256 the hash function.
 * @param leaf hash of the leaf.
 * @param index of the leaf.
 * @param size of the tree.
 * @param path hashes from the leaf up.
 * @returns 32 bytes to compare with a signed root, or null when the path has the wrong length for the place.
 * Throws nothing.
 * Source: RFC 9162 section 2.1.3.2.
 * @example rootFromInclusion(sha256, leaf, 0, 1, []) // leaf
 */
export function rootFromInclusion(
  sha256: Sha256,
  leaf: Uint8Array,
  index: number,
  size: number,
  path: readonly Uint8Array[],
): Uint8Array | null {
  if (!Number.isSafeInteger(index) || !Number.isSafeInteger(size) || index < 0 || index >= size) return null
  let node = index
  let last = size - 1
  let hash = leaf
  for (const sibling of path) {
    if (last === 0) return null
    if (node % 2 === 1 || node === last) {
      hash = nodeHash(sha256, sibling, hash)
      while (node % 2 === 0 && node !== 0) {
        node = Math.floor(node / 2)
        last = Math.floor(last / 2)
      }
    } else {
      hash = nodeHash(sha256, hash, sibling)
    }
    node = Math.floor(node / 2)
    last = Math.floor(last / 2)
  }
  return last === 0 ? hash : null
}

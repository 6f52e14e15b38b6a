import { joinBytes, type Sha256 } from './hash.ts'

/** A one byte and room for two hashes. */
const prefixed = Uint8Array.of(1, ...new Uint8Array(64))

/** A complete subtree of 2^level leaves that starts at leaf index·2^level. Once complete, its hash never changes. */
export type TreeNode = { level: number; index: number; hash: Uint8Array }
export type NodePlace = Pick<TreeNode, 'level' | 'index'>

/**
 * The hash of an inner node.
 *
 * @param sha256 the hash function; of what it is handed it keeps nothing.
 * @param left 32 bytes.
 * @param right 32 bytes.
 * @returns SHA-256 of a one byte, left and right.
 * Throws nothing of its own.
 * Source: RFC 9162 section 2.1.1.
 * @example toHex(nodeHash(sha256, left, right)).length // 64
 */
export function nodeHash(sha256: Sha256, left: Uint8Array, right: Uint8Array): Uint8Array {
  if (left.length !== 32 || right.length !== 32)
    return sha256(joinBytes(prefixed.subarray(0, 1), left, right))
  prefixed.set(left, 1)
  prefixed.set(right, 33)
  return sha256(prefixed)
}

/**
 * Where the complete subtrees stand whose hashes give the root of a tree of that size: one for each one-bit, largest first.
 *
 * @param size number of leaves, 0 to 2^53 - 1.
 * @returns at most 53 places, left to right.
 * Throws nothing.
 * Source: RFC 9162 section 2.1.1 (the split at the largest power of two below the size, followed down the right edge).
 * Sizes are taken apart by division, not by bit operators, which stop at 2^31.
 * @example peakPlaces(6) // [{ level: 2, index: 0 }, { level: 1, index: 2 }]
 */
export function peakPlaces(size: number): NodePlace[] {
  const places: NodePlace[] = []
  for (let level = 0, rest = size; rest > 0; level++, rest = Math.floor(rest / 2)) {
    if (rest % 2 === 1) places.push({ level, index: rest - 1 })
  }
  return places.reverse()
}

/**
 * The root of a tree from its peaks.
 *
 * @param sha256 the hash function.
 * @param peaks hashes at `peakPlaces(size)`, left to right.
 * @returns 32 bytes; of no peaks SHA-256 of nothing, which RFC 9162 gives the empty tree.
 * Throws nothing of its own.
 * Source: RFC 9162 section 2.1.1.
 * @example toHex(rootOf(sha256, [])) // 'e3b0c442…'
 */
export function rootOf(sha256: Sha256, peaks: readonly Uint8Array[]): Uint8Array {
  let root = peaks.at(-1)
  if (root === undefined) return sha256(new Uint8Array())
  for (let i = peaks.length - 2; i >= 0; i--) root = nodeHash(sha256, peaks[i]!, root)
  return root
}

/**
 * Appends leaves: the complete subtrees that come into being, each exactly once, and the new peaks.
 *
 * @param sha256 the hash function.
 * @param size leaves so far.
 * @param peaks hashes at `peakPlaces(size)`, left to right.
 * @param leaves hashes of the new leaves, in order.
 * @returns `added`: new nodes, leaves included, lowest first as they complete; `size` and `peaks` of the larger tree.
 * @throws RangeError when `peaks` do not fit `size`: a broken invariant of the caller.
 * Source: RFC 9162 section 2.1.1. Each leaf costs two hashes on average.
 * @example appendLeaves(sha256, 0, [], [a, b]).added.length // 3
 */
export function appendLeaves(
  sha256: Sha256,
  size: number,
  peaks: readonly Uint8Array[],
  leaves: readonly Uint8Array[],
): { added: TreeNode[]; size: number; peaks: Uint8Array[] } {
  const places = peakPlaces(size)
  if (places.length !== peaks.length) throw new RangeError('The peaks do not fit the size of the tree.')
  const edge: TreeNode[] = places.map((place, i) => ({ ...place, hash: peaks[i]! }))
  const added: TreeNode[] = []
  for (const [i, hash] of leaves.entries()) {
    let node: TreeNode = { level: 0, index: size + i, hash }
    added.push(node)
    for (let left = edge.at(-1); left?.level === node.level; left = edge.at(-1)) {
      edge.pop()
      node = {
        level: left.level + 1,
        index: left.index / 2,
        hash: nodeHash(sha256, left.hash, node.hash),
      }
      added.push(node)
    }
    edge.push(node)
  }
  return { added, size: size + leaves.length, peaks: edge.map((node) => node.hash) }
}

import { type Sha256, toHex } from '../../../shared/ledger/hash.ts'
import { nodeHash } from '../../../shared/ledger/tree.ts'

/** One hash on the way up: what stood before it, and the hash of the proof that it was put together with. */
export type ProofStep = { own: string; sibling: string | null; siblingIsLeft: boolean }

/**
 * The way of a proof that has been checked, hash by hash from the leaf to the root, only to show it: whether it leads to the
 * signed root is decided by `rootFromInclusion`. Source: RFC 9162 section 2.1.3.2.
 */
export function proofSteps(
  sha256: Sha256,
  leaf: Uint8Array,
  index: number,
  size: number,
  path: readonly Uint8Array[],
): ProofStep[] {
  const steps: ProofStep[] = [{ own: toHex(leaf), sibling: null, siblingIsLeft: false }]
  let hash = leaf
  let node = index
  let last = size - 1
  for (const sibling of path) {
    const siblingIsLeft = node % 2 === 1 || node === last
    if (siblingIsLeft) {
      hash = nodeHash(sha256, sibling, hash)
      while (node % 2 === 0 && node !== 0) {
        node = Math.floor(node / 2)
        last = Math.floor(last / 2)
      }
    } else hash = nodeHash(sha256, hash, sibling)
    node = Math.floor(node / 2)
    last = Math.floor(last / 2)
    steps.push({ own: toHex(hash), sibling: toHex(sibling), siblingIsLeft })
  }
  return steps
}

import { createHash } from 'node:crypto'

/**
 * A slow tree written straight from the recursive definitions of RFC 9162 section 2.1, sharing no code with ours: leaf
 * data in, everything recomputed for each answer.
 */
const sha = (...parts: Uint8Array[]) => {
  const hash = createHash('sha256')
  for (const part of parts) hash.update(part)
  return hash.digest()
}

/** MTH(D[n]). */
export function mth(d: readonly Uint8Array[]): Buffer {
  if (d.length === 0) return sha()
  if (d.length === 1) return sha(Uint8Array.of(0), d[0]!)
  const k = split(d.length)
  return sha(Uint8Array.of(1), mth(d.slice(0, k)), mth(d.slice(k)))
}

/** PATH(m, D[n]). */
export function path(m: number, d: readonly Uint8Array[]): Buffer[] {
  if (d.length === 1) return []
  const k = split(d.length)
  return m < k
    ? [...path(m, d.slice(0, k)), mth(d.slice(k))]
    : [...path(m - k, d.slice(k)), mth(d.slice(0, k))]
}

/** PROOF(m, D[n]). */
export const proof = (m: number, d: readonly Uint8Array[]): Buffer[] => subproof(m, d, true)

function subproof(m: number, d: readonly Uint8Array[], b: boolean): Buffer[] {
  const n = d.length
  if (m === n) return b ? [] : [mth(d)]
  const k = split(n)
  return m <= k
    ? [...subproof(m, d.slice(0, k), b), mth(d.slice(k))]
    : [...subproof(m - k, d.slice(k), false), mth(d.slice(0, k))]
}

function split(n: number): number {
  let k = 1
  while (k * 2 < n) k *= 2
  return k
}

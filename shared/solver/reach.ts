import type { Trimmer } from './adjuster.ts'
import { nodeV } from './network.ts'
import type { Missing } from './types.ts'

/**
 * What is missing when an exact node voltage cannot be reached; null when it lies in reach: within half a step of the
 * codes' voltages and within the node's limits.
 * Source: solver.md section 5.
 * @example missingReach(gain, gain.nominalV) // null
 */
export function missingReach(trimmer: Trimmer, exactV: number): Missing | null {
  const k = (exactV - trimmer.v0) / trimmer.stepV
  const beyondCodes = k < -0.5 || k > trimmer.count - 0.5
  const beyondNode = exactV < trimmer.minV || exactV > trimmer.maxV
  if (!beyondCodes && !beyondNode) return null
  const { low, high } = codesSpan(trimmer)
  const above = exactV > high || exactV > trimmer.maxV
  const codesLimit = above ? high : low
  const nodeLimit = above ? trimmer.maxV : trimmer.minV
  const nodeFirst = above ? nodeLimit < codesLimit : nodeLimit > codesLimit
  return {
    wantedV: exactV,
    limitV: nodeFirst ? nodeLimit : codesLimit,
    by: nodeFirst || !beyondCodes ? 'node' : 'codes',
    nearestCode: nearestAllowed(trimmer, k),
  }
}

/** Exact voltage in reach, yet no allowed code near it: the node's limits leave none. */
export function missingCode(trimmer: Trimmer, exactV: number): Missing {
  const nearestCode = nearestAllowed(trimmer, (exactV - trimmer.v0) / trimmer.stepV)
  const limitV = nearestCode === null ? trimmer.nominalV : nodeV(trimmer, nearestCode)
  return { wantedV: exactV, limitV, by: 'node', nearestCode }
}

/** The voltages at the first and last code, lower one first. */
function codesSpan(trimmer: Trimmer): { low: number; high: number } {
  const a = nodeV(trimmer, 0)
  const b = nodeV(trimmer, trimmer.count - 1)
  return a < b ? { low: a, high: b } : { low: b, high: a }
}

function nearestAllowed(trimmer: Trimmer, k: number): number | null {
  if (trimmer.firstCode > trimmer.lastCode) return null
  const code = Math.round(k)
  if (code < trimmer.firstCode) return trimmer.firstCode
  return Math.min(code, trimmer.lastCode)
}

/** A voltage cut to what codes and node allow. */
export function cutToReach(trimmer: Trimmer, v: number): number {
  const { low, high } = codesSpan(trimmer)
  const bottom = Math.max(trimmer.minV, low)
  const top = Math.min(trimmer.maxV, high)
  return v < bottom ? bottom : Math.min(v, top)
}

/**
 * The share of the reach on its side that a node voltage uses: 0 at nominal, null where there is no reach.
 * @example reachUsed(gain, gain.nominalV) // 0
 */
export function reachUsed(trimmer: Trimmer, v: number): number | null {
  if (v === trimmer.nominalV) return 0
  const up = v > trimmer.nominalV
  const reach = up ? trimmer.reachUp : trimmer.reachDown
  if (reach === 0) return null
  return (up ? v - trimmer.nominalV : trimmer.nominalV - v) / reach
}

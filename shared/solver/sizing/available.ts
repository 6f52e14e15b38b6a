import type { Trimmer } from '../adjuster.ts'
import { nodeV } from '../network.ts'
import { floorLog2, log2, SLACK } from './bits.ts'
import type { Reach } from './required.ts'
import type { AdjusterSize, SizeVerdict } from './types.ts'

/** The reach that an adjuster has against the one that it needs. Volts at the node. */
export type Comparison = {
  lowV: number
  highV: number
  reachMargin: number | null
  tighterSide: 'low' | 'high' | null
  limitedBy: 'codes' | 'node' | null
  /** On the tighter side, from nominal. */
  requiredV: number
  availableV: number
}

type Side = { side: 'low' | 'high'; required: number; available: number; margin: number }

/**
 * Available reach, clipped by the node's limits, against the required one on both sides.
 * @returns `reachMargin` is available over required less 1 on the tighter side, -1 where a side has no reach, null where
 *   no side needs any
 * Source: solver.md sections 4 and 6.
 */
export function compareReach(trimmer: Trimmer, required: Reach): Comparison {
  const { nominalV } = trimmer
  const { lowV, highV } = availableEnds(trimmer)
  const sides: Side[] = []
  const down = nominalV - required.lowV
  const up = required.highV - nominalV
  if (down > 0) sides.push(side('low', down, trimmer.reachDown))
  if (up > 0) sides.push(side('high', up, trimmer.reachUp))
  const span = required.highV - required.lowV
  // An end on the far side of nominal: codes that start beyond it leave part of the span unreached.
  if (down <= 0 && lowV > required.lowV) sides.push(side('low', span, required.highV - lowV))
  if (up <= 0 && highV < required.highV) sides.push(side('high', span, highV - required.lowV))
  let tighter: Side | null = null
  for (const candidate of sides) {
    if (tighter === null || candidate.margin < tighter.margin) tighter = candidate
  }
  return {
    lowV,
    highV,
    reachMargin: tighter?.margin ?? null,
    tighterSide: tighter?.side ?? null,
    limitedBy: tighter === null ? null : limitOf(trimmer, tighter.side),
    requiredV: tighter?.required ?? 0,
    availableV: tighter?.available ?? Math.max(trimmer.reachDown, trimmer.reachUp),
  }
}

function side(name: 'low' | 'high', required: number, available: number): Side {
  const least = Math.max(available, 0)
  return { side: name, required, available: least, margin: required > 0 ? least / required - 1 : -1 }
}

/**
 * The voltages between which the node can be set: nominal less and plus the reach; where all codes lie on one side of
 * nominal, from the nearest of them on.
 */
function availableEnds(trimmer: Trimmer): { lowV: number; highV: number } {
  const { nominalV, reachDown, reachUp } = trimmer
  const a = nodeV(trimmer, 0)
  const b = nodeV(trimmer, trimmer.count - 1)
  const lowest = Math.max(Math.min(a, b), trimmer.minV)
  const highest = Math.min(Math.max(a, b), trimmer.maxV)
  return {
    lowV: lowest > nominalV ? lowest : nominalV - reachDown,
    highV: highest < nominalV ? highest : nominalV + reachUp,
  }
}

function limitOf(trimmer: Trimmer, which: 'low' | 'high'): 'codes' | 'node' {
  const a = nodeV(trimmer, 0)
  const b = nodeV(trimmer, trimmer.count - 1)
  if (which === 'low')
    return trimmer.nominalV - trimmer.minV <= trimmer.reachDown && trimmer.minV > Math.min(a, b)
      ? 'node'
      : 'codes'
  return trimmer.maxV - trimmer.nominalV <= trimmer.reachUp && trimmer.maxV < Math.max(a, b)
    ? 'node'
    : 'codes'
}

/**
 * Both margins in one word.
 * @example verdictOf(0.25, 5) // 'covers'
 */
export function verdictOf(reachMargin: number | null, stepMargin: number): SizeVerdict {
  const short = reachMargin !== null && reachMargin < -SLACK
  const coarse = stepMargin * (1 + SLACK) < 1
  if (short) return coarse ? 'both' : 'short'
  return coarse ? 'coarse' : 'covers'
}

/** What depends on the auxiliary DAC that the design has. */
export type Judged = Pick<
  AdjusterSize,
  | 'available'
  | 'reachMargin'
  | 'stepMargin'
  | 'spareBits'
  | 'verdict'
  | 'tighterSide'
  | 'limitedBy'
  | 'reachSpareBits'
  | 'stepSpareBits'
  | 'requiredReachOutputV'
  | 'availableReachOutputV'
>

/**
 * The auxiliary DAC of an adjuster against the reach and step that it needs.
 * @param requiredStepV allowed step at the node; @param outputPerV volts at the output per volt at the node
 * Source: solver.md section 6.
 */
export function judgeAvailable(
  trimmer: Trimmer,
  reach: Reach,
  requiredStepV: number,
  outputPerV: number,
): Judged {
  const stepV = Math.abs(trimmer.stepV)
  const stepMargin = requiredStepV / stepV
  const compared = compareReach(trimmer, reach)
  const { requiredV, availableV, reachMargin } = compared
  return {
    available: {
      bits: trimmer.bits,
      lowV: compared.lowV,
      highV: compared.highV,
      stepV,
      outputStepV: stepV * outputPerV,
    },
    reachMargin,
    stepMargin,
    spareBits: floorLog2(stepMargin),
    verdict: verdictOf(reachMargin, stepMargin),
    tighterSide: compared.tighterSide,
    limitedBy: compared.limitedBy,
    reachSpareBits: availableV > 0 && requiredV > 0 ? log2(availableV / requiredV) : null,
    stepSpareBits: log2(stepMargin),
    requiredReachOutputV: requiredV * outputPerV,
    availableReachOutputV: availableV * outputPerV,
  }
}

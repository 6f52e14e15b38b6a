import type { Channel } from './channel.ts'
import { rangeOf } from './converter.ts'
import { effectOf } from './effects.ts'
import { type NodeMap, nodeMap, nodeV, refuse } from './network.ts'
import type { Coding, UsedEffect, Which } from './types.ts'

/** An adjuster on one range, checked once: its effect, its node voltages, the codes that the node's limits allow. */
export type Trimmer = NodeMap & {
  which: Which
  /** α and β: (α + β·z) V at the output per volt at the node. */
  alpha: number
  beta: number
  tolerance: number
  effect: UsedEffect
  /** Effect at the low end and at full scale, V/V. */
  endLow: number
  endFull: number
  bits: number
  coding: Coding
  nominalV: number
  /** Limits of the node; infinite where none is stated. */
  minV: number
  maxV: number
  /** Allowed codes; first > last when there is none. */
  firstCode: number
  lastCode: number
  /** Reach above and below nominal, V. */
  reachUp: number
  reachDown: number
}

/** The adjusters of a channel, prepared; at least one. */
export type Trimmers = { gain: Trimmer | null; offset: Trimmer | null }

/**
 * Prepares an adjuster of a channel; null when the design has none.
 * @param learned replaces the design's effect
 * @throws effect-zero, tolerance-out-of-bounds, resistance-not-positive, source-span-zero, bits-out-of-bounds, not-finite
 * Source: solver.md sections 4 and 7.
 * @example prepareTrimmer(channel, 'gain').count // 4096
 */
export function prepareTrimmer(channel: Channel, which: Which, learned?: UsedEffect): Trimmer | null {
  const adjuster = channel.design.adjusters[which]
  if (adjuster === undefined) return null
  const { range } = channel
  const map = nodeMap(adjuster, which)
  const tolerance = adjuster.effectTolerance ?? 0
  if (!(tolerance >= 0 && tolerance < 1)) {
    refuse('tolerance-out-of-bounds', which, 'effectTolerance', `${tolerance} is not at least 0 and under 1.`)
  }
  const slopes = effectOf(adjuster, rangeOf(channel.design, range.id), range, which)
  const effect: UsedEffect = learned ?? {
    slopePerV: slopes.slopePerV,
    offsetPerV: slopes.offsetPerV,
    tolerance,
    source: 'design',
    factor: 1,
    why: null,
  }
  const { nominalV } = adjuster.node
  const minV = adjuster.node.minV ?? Number.NEGATIVE_INFINITY
  const maxV = adjuster.node.maxV ?? Number.POSITIVE_INFINITY
  const codes = allowedCodes(map, minV, maxV)
  return {
    // A literal that starts with a spread takes V8 a hundred times as long: a key of its own stands first.
    which,
    ...map,
    ...effectEnds(effect, channel),
    bits: adjuster.source.bits,
    coding: adjuster.source.coding,
    nominalV,
    minV,
    maxV,
    ...codes,
    ...reaches(map, nominalV, minV, maxV, adjuster.source.spanTolerance ?? 0),
  }
}

/** α, β and the effect at the two ends; an end that is zero but for rounding is set to zero (solver.md section 5). */
function effectEnds(effect: UsedEffect, { range }: Channel) {
  const alpha = effect.offsetPerV
  const beta = effect.slopePerV
  const small = 1e-12 * (Math.abs(alpha) + Math.abs(beta) * range.zMax)
  const atLow = alpha + beta * range.zLow
  const atFull = alpha + beta * range.zFull
  return {
    effect,
    alpha,
    beta,
    tolerance: effect.tolerance,
    endLow: Math.abs(atLow) < small ? 0 : atLow,
    endFull: Math.abs(atFull) < small ? 0 : atFull,
  }
}

/** The first and last code whose node voltage respects both limits. Node voltages rise or fall with the code throughout. */
function allowedCodes(map: NodeMap, minV: number, maxV: number): { firstCode: number; lastCode: number } {
  const rising = map.stepV > 0
  const low = rising ? minV : maxV
  const high = rising ? maxV : minV
  const inside = (code: number): boolean => {
    const v = nodeV(map, code)
    return v >= minV && v <= maxV
  }
  let firstCode = clampCode(Math.floor((low - map.v0) / map.stepV) - 1, map.count)
  let lastCode = clampCode(Math.ceil((high - map.v0) / map.stepV) + 1, map.count)
  while (firstCode <= lastCode && !inside(firstCode)) firstCode += 1
  while (lastCode >= firstCode && !inside(lastCode)) lastCode -= 1
  return { firstCode, lastCode }
}

function clampCode(code: number, count: number): number {
  return code < 0 ? 0 : Math.min(code, count - 1)
}

/** From nominal to the codes' extreme voltage (less the span's tolerance) or the node's limit, whichever comes first. */
function reaches(map: NodeMap, nominalV: number, minV: number, maxV: number, spanTolerance: number) {
  const a = nodeV(map, 0)
  const b = nodeV(map, map.count - 1)
  const up = (Math.max(a, b) - nominalV) * (1 - spanTolerance)
  const down = (nominalV - Math.min(a, b)) * (1 - spanTolerance)
  const nodeUp = maxV - nominalV
  const nodeDown = nominalV - minV
  const reachUp = Math.min(up, nodeUp)
  const reachDown = Math.min(down, nodeDown)
  return { reachUp: Math.max(reachUp, 0), reachDown: Math.max(reachDown, 0) }
}

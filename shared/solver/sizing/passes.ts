import type { Channel } from '../channel.ts'
import type { Row } from './nulling.ts'
import { planVariance } from './plan.ts'
import type { Passes } from './types.ts'

/** One adjuster as the forecast sees it. Volts at the node, V/V. */
export type Moving = {
  tolerance: number
  outputPerV: number
  stepV: number
  /** The farthest that the budget moves it from nominal, before margin: |centre| + size. */
  farthestV: number
  row: Row
}

const MOST = 9

/**
 * How many trims until the target is met in the worst case: by the effects as stated, and by the effects learned from
 * the move of pass 1.
 * @returns the smallest p >= 1 with Σ τ^p·E·R + ½Σ s·E <= T, at most 9, else null
 * Source: solver.md section 6. R is |centre| + size, so that a budget with a bias is forecast by the move it really asks;
 * without a bias this is the page's R.
 */
export function forecastPasses(
  channel: Channel,
  codes: readonly number[],
  moving: readonly Moving[],
): Passes {
  const nominal = moving.map(({ tolerance }) => tolerance)
  const learned = moving.map((adjuster) => learnedTolerance(channel, codes, adjuster))
  return {
    withNominalEffect: smallest(channel.targetV, moving, nominal),
    withMeasuredEffect: smallest(channel.targetV, moving, learned),
  }
}

/** `later`: the tolerance that each further pass multiplies by; the first always works with the stated one. */
function smallest(targetV: number, moving: readonly Moving[], later: readonly number[]): number | null {
  let quantising = 0
  for (const { stepV, outputPerV } of moving) quantising += (Math.abs(stepV) * outputPerV) / 2
  const left = moving.map(({ tolerance, outputPerV, farthestV }) => tolerance * outputPerV * farthestV)
  for (let p = 1; p <= MOST; p++) {
    let sum = quantising
    for (const part of left) sum += part
    if (sum <= targetV * (1 + 1e-9)) return p
    for (let i = 0; i < left.length; i++) left[i]! *= later[i]!
  }
  return null
}

/**
 * 2·u(f) of the secant over the farthest move, as `learnEffects` would find it from two fits of the plan; the stated
 * tolerance where that is not better known, or where fits of this plan have no variances. A plan that states no noise
 * is taken as without noise.
 */
function learnedTolerance(
  channel: Channel,
  codes: readonly number[],
  { tolerance, farthestV, row }: Moving,
): number {
  if (channel.method === 'minimax' || farthestV === 0) return tolerance
  const variance = planVariance(channel, codes)
  if (variance === null) return new Set(codes).size > 2 && channel.method === 'best-fit' ? 0 : tolerance
  const one =
    row.o * row.o * variance.offset + 2 * row.o * row.g * variance.cov + row.g * row.g * variance.gain
  const u = Math.sqrt(2 * Math.max(one, 0)) / farthestV
  return u > tolerance / Math.sqrt(3) ? tolerance : Math.min(2 * u, tolerance)
}

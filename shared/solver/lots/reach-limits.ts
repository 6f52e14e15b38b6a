import type { Trimmer } from '../adjuster.ts'
import { nodeV } from '../network.ts'
import type { TrimChannel } from '../prepare-trim.ts'
import { reachUsed } from '../reach.ts'
import { exactMoves } from '../solve-exact.ts'
import type { Which } from '../types.ts'
import type { Limits } from './capability.ts'

/**
 * The errors that an adjuster's reach on each side nulls while the other adjuster stands at nominal.
 * @param share of the stated effect that is counted on: 1, or 1 - τ at worst
 * @returns of `gain` slope as a ratio, of `offset` volts; both ends 0 where the adjuster does not move that error
 * Source: solver.md section 10.
 * @example reachLimits({ ...gain, which: 'gain', beta: -2, reachUp: 3, reachDown: 1 }, 0.5) // { low: -1, high: 3 }
 */
export function reachLimits(trimmer: Trimmer, share: number): Limits {
  const effect = (trimmer.which === 'gain' ? trimmer.beta : trimmer.alpha) * share
  // A node above nominal takes away an error of the sign opposite to its effect. + 0 keeps -0 out.
  const up = -effect * trimmer.reachUp + 0
  const down = effect * trimmer.reachDown + 0
  return up < down ? { low: up, high: down } : { low: down, high: up }
}

/** The same with the effect at its worst, 1 - τ: what Cp and Cpk stand against. */
export const worstReach = (trimmer: Trimmer): Limits => reachLimits(trimmer, 1 - trimmer.tolerance)

type Codes = { gain?: number | undefined; offset?: number | undefined }

/**
 * The share of its reach that each adjuster uses: at the codes given, else (out of reach) at the exact voltage that would
 * null the line with nothing loaded.
 * @param line O in V, G as a ratio
 * @returns ratios, over 1 when out of reach; null for an absent adjuster and where there is no reach on that side
 * Source: solver.md section 5 (`reachUsed`).
 * @example shareOfReach({ channel, trimmers }, null, { offset: 0, gain: 0 }).gain // 0
 */
export function shareOfReach(
  { channel, trimmers }: TrimChannel,
  codes: Codes | null,
  line: { offset: number; gain: number },
): Record<Which, number | null> {
  const { gain, offset } = trimmers
  const moves = codes === null ? exactMoves(gain, offset, channel.range, line.offset, line.gain) : null
  const share = (which: Which): number | null => {
    const trimmer = trimmers[which]
    if (trimmer === null) return null
    const code = codes?.[which]
    if (code !== undefined) return reachUsed(trimmer, nodeV(trimmer, code))
    const move = moves?.[which]
    return move === null || move === undefined ? null : reachUsed(trimmer, trimmer.nominalV + move)
  }
  return { gain: share('gain'), offset: share('offset') }
}

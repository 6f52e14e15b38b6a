import type { Trimmer, Trimmers } from './adjuster.ts'
import type { Channel } from './channel.ts'
import { type Move, moveLine, worstEnd } from './predict.ts'
import { cutToReach } from './reach.ts'
import { aloneMove, effectAt, nullingPoint } from './solve-exact.ts'
import type { Missing, PerAdjuster, TrimResult } from './types.ts'

/**
 * What is missing per adjuster and the worst error left when those out of reach stand at their limit and the other is
 * solved again alone (unrounded, and cut to its own reach).
 * Source: solver.md section 5.
 */
export function shortfallOf(
  channel: Channel,
  trimmers: Trimmers,
  line: { offset: number; gain: number },
  nowV: Move,
  missing: PerAdjuster<Missing>,
): NonNullable<TrimResult['shortfall']> {
  const dv: Move = { gain: 0, offset: 0 }
  for (const which of ['gain', 'offset'] as const) {
    const short = missing[which]
    if (short !== undefined) dv[which] = short.limitV - nowV[which]
  }
  for (const which of ['gain', 'offset'] as const) {
    const other = trimmers[which]
    if (other === null || missing[which] !== undefined) continue
    dv[which] = againAlone(channel, other, moveLine(channel, trimmers, line, dv), nowV[which])
  }
  const remainingWorstV = worstEnd(moveLine(channel, trimmers, line, dv))
  return { ...missing, remainingWorstV }
}

function againAlone(
  channel: Channel,
  trimmer: Trimmer,
  line: { offset: number; gain: number },
  nowV: number,
): number {
  const { range } = channel
  if (effectAt(trimmer, nullingPoint(trimmer, range)) === 0) return 0
  const wanted = nowV + aloneMove(trimmer, range, line.offset, line.gain)
  return cutToReach(trimmer, wanted) - nowV
}

import type { Trimmers } from '../adjuster.ts'
import { prepareTrimmer } from '../adjuster.ts'
import { appliedVoltages } from '../applied.ts'
import { fitSet } from '../fit.ts'
import { fitMinimax } from '../fit-minimax.ts'
import { fitTerminal } from '../fit-terminal.ts'
import { jointCodes, nearestTrimCode } from '../joint-codes.ts'
import { learnEffects, type PreviousPass } from '../learn.ts'
import { leastSquares } from '../least-squares.ts'
import { nodeV } from '../network.ts'
import type { PointSet } from '../points.ts'
import { moveLine, worstEnd } from '../predict.ts'
import { missingReach } from '../reach.ts'
import { exactMoves } from '../solve-exact.ts'
import type { YieldPlan } from './plan.ts'

/** Codes of one pass and what the solver thinks of them. Null codes for an absent adjuster. */
export type Trimmed = { gain: number | null; offset: number | null; tooCoarse: boolean }

type Now = { gain: number; offset: number }

/** What a pass hands to the next one when effects are learned. */
export type Memory = { previous: PreviousPass | null }

/**
 * The codes for measured points: the same fit, exact solution, reach and joint rounding as `codesOn`, without the words
 * around them. Null when out of reach.
 * @param loaded codes applied while measuring, null for neutral
 * @param memory the pass before, and where this one is kept; null to use the design's effects throughout
 * Source: solver.md sections 3 to 5.
 */
export function trimUnit(
  plan: YieldPlan,
  set: PointSet,
  loaded: Trimmed | null,
  memory: Memory | null,
): Trimmed | null {
  const { channel } = plan.trim
  const now: Now = loaded === null ? neutral(plan.trim.trimmers) : appliedNow(plan, loaded)
  if (memory === null) {
    const line = quickLine(plan, set)
    return codesFor(plan, plan.trim.trimmers, line.offset, line.gain, now)
  }
  const fitted = fitSet(channel, set, {})
  let trimmers = plan.trim.trimmers
  if (memory.previous !== null) {
    const { effects } = learnEffects(channel, trimmers, fitted.line, now, memory.previous)
    trimmers = {
      gain: prepareTrimmer(channel, 'gain', effects.gain),
      offset: prepareTrimmer(channel, 'offset', effects.offset),
    }
  }
  memory.previous = { fit: fitted.result, trim: { appliedNodeV: now } }
  return codesFor(plan, trimmers, fitted.line.offset, fitted.line.gain, now)
}

/** Offset and slope by the plan's method; the uncertainties that `fitSet` adds change no code. */
function quickLine({ trim: { channel } }: YieldPlan, set: PointSet): { offset: number; gain: number } {
  if (channel.method === 'best-fit') return leastSquares(set.z, set.e, set.u)
  return channel.method === 'minimax' ? fitMinimax(set) : fitTerminal(set, channel.noise)
}

function neutral({ gain, offset }: Trimmers): Now {
  return { gain: gain?.nominalV ?? 0, offset: offset?.nominalV ?? 0 }
}

function appliedNow({ trim: { trimmers } }: YieldPlan, loaded: Trimmed): Now {
  return appliedVoltages(trimmers, { gain: loaded.gain ?? undefined, offset: loaded.offset ?? undefined })
}

function codesFor(plan: YieldPlan, trimmers: Trimmers, o: number, g: number, now: Now): Trimmed | null {
  const { channel } = plan.trim
  const { range } = channel
  const { gain, offset } = trimmers
  const moves = exactMoves(gain, offset, range, o, g)
  const exactGain = now.gain + (moves.gain ?? 0)
  const exactOffset = now.offset + (moves.offset ?? 0)
  if (gain !== null && missingReach(gain, exactGain) !== null) return null
  if (offset !== null && missingReach(offset, exactOffset) !== null) return null
  const codes: Trimmed = { gain: null, offset: null, tooCoarse: false }
  if (gain !== null && offset !== null) {
    const start = {
      errorLow: o + g * range.zLow,
      errorFull: o + g * range.zFull,
      gainV: now.gain,
      offsetV: now.offset,
    }
    const pair = jointCodes(gain, offset, start, exactGain, exactOffset)
    if (pair !== null) {
      codes.gain = pair.gain
      codes.offset = pair.offset
    }
  }
  if (gain !== null && codes.gain === null) codes.gain = nearestTrimCode(gain, exactGain)
  if (offset !== null && codes.offset === null) codes.offset = nearestTrimCode(offset, exactOffset)
  if ((gain !== null && codes.gain === null) || (offset !== null && codes.offset === null)) return null
  const dv = {
    gain: gain === null ? 0 : nodeV(gain, codes.gain!) - now.gain,
    offset: offset === null ? 0 : nodeV(offset, codes.offset!) - now.offset,
  }
  codes.tooCoarse = worstEnd(moveLine(channel, trimmers, { offset: o, gain: g }, dv)) > channel.targetV
  return codes
}

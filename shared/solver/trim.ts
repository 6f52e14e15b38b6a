import type { Trimmer, Trimmers } from './adjuster.ts'
import type { Channel } from './channel.ts'
import { wordText } from './coding.ts'
import type { Fitted } from './fit.ts'
import { jointCodes, nearestTrimCode } from './joint-codes.ts'
import type { Line } from './line.ts'
import { nodeV, refuse } from './network.ts'
import { type Move, moveLine, predict, worstEnd } from './predict.ts'
import { missingCode, missingReach, reachUsed } from './reach.ts'
import { shortfallOf } from './shortfall.ts'
import { exactMoves } from './solve-exact.ts'
import type { Flag, Missing, PerAdjuster, Predicted, TrimResult, Verdict } from './types.ts'

/**
 * Codes, prediction and verdict for a fitted line.
 * @param nowV node voltages while it was measured
 * @throws adjusters-not-independent, adjuster-without-effect
 * Source: solver.md section 5.
 */
export function trimOf(channel: Channel, trimmers: Trimmers, fitted: Fitted, nowV: Move): TrimResult {
  const { line } = fitted
  const { gain, offset } = trimmers
  const moves = exactMoves(gain, offset, channel.range, line.offset, line.gain)
  const exact: Move = {
    gain: nowV.gain + (moves.gain ?? 0),
    offset: nowV.offset + (moves.offset ?? 0),
  }
  for (const which of ['gain', 'offset'] as const) {
    if (!Number.isFinite(exact[which]))
      refuse('not-finite', which, 'effect', 'its effect asks for no finite voltage.')
  }
  const base = {
    exactNodeV: each(trimmers, (t) => exact[t.which]),
    appliedNodeV: each(trimmers, (t) => nowV[t.which]),
    effects: each(trimmers, (t) => t.effect),
  }
  const suspect = fitted.result.flags.some(isSuspect)
  const missing: PerAdjuster<Missing> = {}
  for (const which of ['gain', 'offset'] as const) {
    const t = trimmers[which]
    const short = t === null ? null : missingReach(t, exact[which])
    if (short !== null) missing[which] = short
  }
  const short = missing.gain !== undefined || missing.offset !== undefined
  const codes = short ? null : chooseCodes(channel, trimmers, line, nowV, exact, missing)
  if (codes === null) {
    const reasons: Verdict[] = suspect ? ['out-of-reach', 'suspect'] : ['out-of-reach']
    return {
      verdict: 'out-of-reach',
      reasons,
      codes: null,
      words: null,
      nodeV: null,
      exactNodeV: base.exactNodeV,
      appliedNodeV: base.appliedNodeV,
      effects: base.effects,
      reachUsed: each(trimmers, (t) => reachUsed(t, exact[t.which])),
      shortfall: shortfallOf(channel, trimmers, line, nowV, missing),
      predicted: null,
      notes: [],
    }
  }
  return withCodes(channel, trimmers, fitted, nowV, exact, codes, suspect, base)
}

type Base = Pick<TrimResult, 'exactNodeV' | 'appliedNodeV' | 'effects'>

function withCodes(
  channel: Channel,
  trimmers: Trimmers,
  fitted: Fitted,
  nowV: Move,
  exact: Move,
  codes: PerAdjuster<number>,
  suspect: boolean,
  base: Base,
): TrimResult {
  const volts = each(trimmers, (t) => nodeV(t, codes[t.which]!))
  const dv: Move = {
    gain: (volts.gain ?? nowV.gain) - nowV.gain,
    offset: (volts.offset ?? nowV.offset) - nowV.offset,
  }
  const predicted = predict(channel, trimmers, fitted.line, fitted.instr, dv)
  const reasons: string[] = suspect ? ['suspect'] : []
  if (predicted.worstV > channel.targetV) {
    reasons.push('too-coarse', ...loneReason(channel, trimmers, fitted.line, nowV, exact))
  }
  return {
    verdict: (reasons[0] as Verdict | undefined) ?? 'ok',
    reasons,
    codes,
    words: each(trimmers, (t) => wordText(codes[t.which]!, t.bits, t.coding)),
    nodeV: volts,
    exactNodeV: base.exactNodeV,
    appliedNodeV: base.appliedNodeV,
    effects: base.effects,
    reachUsed: each(trimmers, (t) => reachUsed(t, volts[t.which]!)),
    shortfall: null,
    predicted,
    notes: notesOf(channel, predicted),
  }
}

function isSuspect(flag: Flag): boolean {
  return flag.flag === 'unsettled' || flag.flag === 'outlier' || flag.flag === 'inconsistent'
}

function notesOf(channel: Channel, predicted: Predicted): string[] {
  return predicted.worstV + predicted.effectV > channel.targetV ? ['verify-after-loading'] : []
}

/** Codes nearest to the exact voltages, jointly for two; null, with what is missing filled in, when none is near. */
function chooseCodes(
  channel: Channel,
  { gain, offset }: Trimmers,
  line: Line,
  nowV: Move,
  exact: Move,
  missing: PerAdjuster<Missing>,
): PerAdjuster<number> | null {
  if (gain !== null && offset !== null) {
    const { range } = channel
    const start = {
      errorLow: line.offset + line.gain * range.zLow,
      errorFull: line.offset + line.gain * range.zFull,
      gainV: nowV.gain,
      offsetV: nowV.offset,
    }
    const pair = jointCodes(gain, offset, start, exact.gain, exact.offset)
    if (pair !== null) return pair
  }
  const codes: PerAdjuster<number> = {}
  for (const t of [gain, offset]) {
    if (t === null) continue
    const code = nearestTrimCode(t, exact[t.which])
    if (code === null) missing[t.which] = missingCode(t, exact[t.which])
    else codes[t.which] = code
  }
  return missing.gain === undefined && missing.offset === undefined ? codes : null
}

/** With one adjuster: does what it cannot reach, exact voltage given, pass the target by itself? */
function loneReason(channel: Channel, trimmers: Trimmers, line: Line, nowV: Move, exact: Move): string[] {
  if (trimmers.gain !== null && trimmers.offset !== null) return []
  const dv = { gain: exact.gain - nowV.gain, offset: exact.offset - nowV.offset }
  if (!(worstEnd(moveLine(channel, trimmers, line, dv)) > channel.targetV)) return []
  return [trimmers.gain === null ? 'no-gain-adjuster' : 'no-offset-adjuster']
}

/** A value per adjuster that the design has; an absent adjuster's key is absent. */
function each<T>(trimmers: Trimmers, value: (trimmer: Trimmer) => T): PerAdjuster<T> {
  const result: PerAdjuster<T> = {}
  if (trimmers.gain !== null) result.gain = value(trimmers.gain)
  if (trimmers.offset !== null) result.offset = value(trimmers.offset)
  return result
}

import type { Trimmer, Trimmers } from './adjuster.ts'
import type { Channel } from './channel.ts'
import { type InstrumentU, instrumentU } from './instrument.ts'
import type { Line } from './line.ts'
import { determinant, effectAt, nullingPoint } from './solve-exact.ts'
import type { FitResult, Flag, PerAdjuster, UsedEffect, Which } from './types.ts'

/** The pass before in the same chain: a stored `ogee.codes/1` is one. */
export type PreviousPass = { fit: FitResult; trim: { appliedNodeV: PerAdjuster<number> } }

export type Learned = { effects: PerAdjuster<UsedEffect>; flags: Flag[] }

type Row = { o: number; g: number }

/**
 * Effects learned from what a move really did (secant): f = what the fits saw over what was moved.
 * @param trimmers adjusters with the design's effects
 * @param line the fit of this pass; @param nowV node voltages while it was measured
 * @param previous the pass before, with its fit and its applied node voltages
 * @param instrument limits of this pass's instrument; only the same one (by id) cancels in the difference
 * @returns effects to use: learned where well enough known, else the design's with `why` (`no-uncertainty`,
 *   `not-moved`, `too-uncertain`, `effect-off`); the flag `effect-off` for a factor outside its tolerance
 * @throws adjusters-not-independent
 * Source: solver.md section 5, effects learned.
 * @example learnEffects(channel, trimmers, line, { gain: 0, offset: 0 }, result).effects.gain.why // 'not-moved'
 */
export function learnEffects(
  channel: Channel,
  trimmers: Trimmers,
  line: Line,
  nowV: { gain: number; offset: number },
  previous: PreviousPass,
  instrument: FitResult['instrument'] = previous.fit.instrument,
): Learned {
  const before = previous.fit
  const dO = line.offset - before.offsetErrorV
  const dG = line.gain - before.gainErrorPpm / 1e6
  const cov = sumOfCovariances(channel, line, before, instrument)
  const effects: PerAdjuster<UsedEffect> = {}
  const flags: Flag[] = []
  for (const which of ['gain', 'offset'] as const) {
    const trimmer = trimmers[which]
    if (trimmer === null) continue
    const moved = nowV[which] - (previous.trim.appliedNodeV[which] ?? trimmer.nominalV)
    const row = inverseRow(channel, trimmers, which)
    const seen = row.o * dO + row.g * dG
    const u2 =
      cov === null
        ? null
        : row.o * row.o * cov.offset + 2 * row.o * row.g * cov.cov + row.g * row.g * cov.gain
    effects[which] = judge(trimmer, moved, seen, u2, flags)
  }
  return { effects, flags }
}

function judge(trimmer: Trimmer, moved: number, seen: number, u2: number | null, flags: Flag[]): UsedEffect {
  const { effect, tolerance } = trimmer
  const keep = (why: string): UsedEffect => ({ ...effect, why })
  if (moved === 0) return keep('not-moved')
  if (u2 === null) return keep('no-uncertainty')
  const factor = seen / moved
  const u = Math.sqrt(u2 > 0 ? u2 : 0) / Math.abs(moved)
  if (u > tolerance / Math.sqrt(3)) return keep('too-uncertain')
  const off = Math.abs(factor - 1) - tolerance
  if (off > 2 * u) {
    const limit = factor > 1 ? 1 + tolerance : 1 - tolerance
    flags.push({ flag: 'effect-off', code: null, value: factor, limit, unit: trimmer.which })
    return keep('effect-off')
  }
  const learnedTolerance = (2 * u) / factor
  // A factor that is not surely positive says nothing to build on.
  if (!(factor > 0) || learnedTolerance >= 1) return keep('too-uncertain')
  return {
    slopePerV: effect.slopePerV * factor,
    offsetPerV: effect.offsetPerV * factor,
    tolerance: learnedTolerance,
    source: 'learned',
    factor,
    why: null,
  }
}

/** The row of M⁻¹ that gives an adjuster's move from (ΔO, ΔG); alone, the row that reads the error where it nulls. */
function inverseRow(channel: Channel, trimmers: Trimmers, which: Which): Row {
  const { gain, offset } = trimmers
  if (gain !== null && offset !== null) {
    const det = determinant(gain, offset)
    return which === 'offset'
      ? { o: gain.beta / det, g: -gain.alpha / det }
      : { o: -offset.beta / det, g: offset.alpha / det }
  }
  const alone = (gain ?? offset)!
  const z = nullingPoint(alone, channel.range)
  const lever = effectAt(alone, z)
  return lever === 0 ? { o: 0, g: 0 } : { o: 1 / lever, g: z / lever }
}

/**
 * Sum of both fits' covariances without the instrument's common part, which cancels in the difference; two different
 * instruments have nothing in common, so both their parts stay.
 */
function sumOfCovariances(
  channel: Channel,
  line: Line,
  before: FitResult,
  instrument: FitResult['instrument'],
): Line['variance'] {
  const std = before.standardUncertainty
  if (line.variance === null || std === null) return null
  const { x0 } = channel.range
  const isSame = (before.instrument?.id ?? null) === (instrument?.id ?? null)
  const added: InstrumentU = instrumentU(isSame ? null : instrument)
  const addedG2 = added.gain * added.gain
  const instr: InstrumentU = instrumentU(isSame ? before.instrument : null)
  const g2 = instr.gain * instr.gain
  const uGain = std.gainPpm / 1e6
  const least = (v: number): number => Math.max(v, 0)
  const was2 = least(std.offsetV * std.offsetV - instr.offset * instr.offset - x0 * x0 * g2)
  return {
    offset: line.variance.offset + was2 + (added.offset * added.offset + x0 * x0 * addedG2),
    gain: line.variance.gain + least(uGain * uGain - g2) + addedG2,
    cov: line.variance.cov + std.covarianceVPpm / 1e6 - x0 * g2 + x0 * addedG2,
  }
}

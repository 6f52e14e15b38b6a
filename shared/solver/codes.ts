import { prepareTrimmer, type Trimmers } from './adjuster.ts'
import { appliedVoltages } from './applied.ts'
import { type FitOptions, type Fitted, fitChannel } from './fit.ts'
import { learnEffects, type PreviousPass } from './learn.ts'
import { prepareTrim, type TrimChannel } from './prepare-trim.ts'
import { sharedLines } from './shared-range.ts'
import { trimOf } from './trim.ts'
import type { Applied, CodesResult, Design, FitResult, MeasuredPoint } from './types.ts'
import { SOLVER_VERSION } from './version.ts'

export type CodesOptions = FitOptions & {
  /** Codes loaded while measuring. Left out: neutral, with the note `assumed-neutral`. */
  applied?: Applied | undefined
  /** The pass before, when its move shall teach the effects. */
  learned?: PreviousPass | undefined
  /** Points of the ranges that share this one's hardware, by range id, when they were measured too. */
  sharedPoints?: Readonly<Record<string, readonly MeasuredPoint[]>> | undefined
}

/**
 * The trim codes of one measured unit, channel and range.
 * @param design `ogee.design/1`, checked, with at least one adjuster
 * @param points 2 to 4096 points at two or more codes; volts
 * @param options range, applied codes, method, instrument, effects to learn from
 * @returns `ogee.codes/1`: the fit, codes with words and node voltages, the predicted line, a verdict with its reasons;
 *   clipped codes are never given
 * @throws as `fitPoints`; no-adjuster, applied-unknown, adjusters-not-independent, adjuster-without-effect, effect-zero,
 *   resistance-not-positive, source-span-zero and others of the design, with places
 * Source: solver.md sections 1 to 5 and 7.
 * @example computeCodes(unipolar18, points).trim.codes // { gain: 2593, offset: 2048 }
 */
export function computeCodes(
  design: Design,
  points: readonly MeasuredPoint[],
  options: CodesOptions = {},
): CodesResult {
  return codesOn(prepareTrim(design, options.rangeId), points, options)
}

/** As `computeCodes`, on a prepared channel (`options.rangeId` is not read). */
export function codesOn(
  prepared: TrimChannel,
  points: readonly MeasuredPoint[],
  options: CodesOptions = {},
): CodesResult {
  const { channel } = prepared
  const fitted = fitChannel(channel, points, options)
  const nowV = appliedVoltages(prepared.trimmers, options.applied)
  const { trimmers, fit } = withLearned(prepared, fitted, nowV, options.learned)
  const trim = trimOf(channel, trimmers, fitted, nowV)
  if (nowV.assumed) trim.notes.push('assumed-neutral')
  if (channel.sharedWith.length > 0) {
    trim.shared = sharedLines(channel, trim, options.sharedPoints ?? {}, options)
  }
  return { format: 'ogee.codes/1', solver: SOLVER_VERSION, range: channel.range.id, fit, trim }
}

function withLearned(
  { channel, trimmers }: TrimChannel,
  fitted: Fitted,
  nowV: { gain: number; offset: number },
  previous: PreviousPass | undefined,
): { trimmers: Trimmers; fit: FitResult } {
  if (previous === undefined) return { trimmers, fit: fitted.result }
  const { effects, flags } = learnEffects(
    channel,
    trimmers,
    fitted.line,
    nowV,
    previous,
    fitted.result.instrument,
  )
  return {
    trimmers: {
      gain: prepareTrimmer(channel, 'gain', effects.gain),
      offset: prepareTrimmer(channel, 'offset', effects.offset),
    },
    fit: { ...fitted.result, flags: [...fitted.result.flags, ...flags] },
  }
}

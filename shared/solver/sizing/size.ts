import { OgeeError } from '../../errors.ts'
import type { Trimmer, Trimmers } from '../adjuster.ts'
import type { Channel } from '../channel.ts'
import { prepareTrim } from '../prepare-trim.ts'
import type { PerAdjuster } from '../types.ts'
import { SOLVER_VERSION } from '../version.ts'
import { judgeAvailable } from './available.ts'
import { bitsFor } from './bits.ts'
import { budgetTerms, type Terms } from './budget.ts'
import { extentsFromBudget, extentsFromUnits, type ToTrim } from './extents.ts'
import { nullingRow, type Row } from './nulling.ts'
import { forecastPasses } from './passes.ts'
import { remarksOf } from './remarks.ts'
import { type Reach, recommend, requiredReach } from './required.ts'
import { residualBudget } from './residual.ts'
import type { AdjusterSize, MeasuredUnits, SizeResult, SizeVerdict, SizingDesign } from './types.ts'

export type SizeOptions = {
  rangeId?: string | undefined
  /** Take the extents from these units instead of the budget's initial lines. */
  measuredUnits?: MeasuredUnits | undefined
}

/** An adjuster with everything that its size rests on. */
export type Sized = { trimmer: Trimmer; row: Row; reach: Reach; outputPerV: number; size: AdjusterSize }

/** A design prepared for sizing: its range, adjusters, budget and rules. */
export type Prepared = {
  channel: Channel
  trimmers: Trimmers
  terms: Terms
  trim: ToTrim
  combine: 'worst-case' | 'rss'
  margin: number
}

/**
 * How far the adjusters must reach and how finely they must step, against what the design has.
 * @param design `ogee.design/1`, checked, with a budget (or measured units) and at least one adjuster
 * @param options range; units measured with nothing loaded in the place of the budget's initial lines
 * @returns `ogee.size/1`: extents, required and available reach and step at each node in V, bits, margins, verdicts,
 *   residual after trim, passes
 * @throws budget-empty, budget-line, and as `prepareTrim`: effect-zero, adjusters-not-independent,
 *   tolerance-out-of-bounds, range-reversed, bits-out-of-bounds, no-adjuster and others, with places
 * Source: solver.md section 6.
 * @example sizeDesign(unipolar18).adjusters.gain?.requiredBits // 10
 */
export function sizeDesign(design: SizingDesign, options: SizeOptions = {}): SizeResult {
  const prepared = prepare(design, options)
  const { channel, trimmers } = prepared
  const { range, targetV } = channel
  const sized = sizeAdjusters(prepared)
  const adjusters: PerAdjuster<AdjusterSize> = {}
  for (const { trimmer, size } of sized) adjusters[trimmer.which] = size
  const moving = sized.map(({ trimmer, reach, outputPerV, row }) => ({
    tolerance: trimmer.tolerance,
    outputPerV,
    stepV: trimmer.stepV,
    farthestV: Math.abs(reach.centre) + reach.size,
    row,
  }))
  return {
    format: 'ogee.size/1',
    solver: SOLVER_VERSION,
    range: range.id,
    lsbV: range.lsbV,
    targetV,
    extents: prepared.trim.extents,
    adjusters,
    residual: residualBudget(design, channel, trimmers, prepared.terms, prepared.trim.terms),
    passes: forecastPasses(channel, design.measurement.points ?? [], moving),
    verdict: overall(sized.map(({ size }) => size.verdict)),
    combine: prepared.combine,
    margin: prepared.margin,
    remarks: remarksOf(design, sized),
  }
}

/** The adjusters that the design has, gain first. */
export function sizeAdjusters(prepared: Prepared): Sized[] {
  const { gain, offset } = prepared.trimmers
  return [gain, offset].filter((t) => t !== null).map((t) => sizeOf(prepared, t))
}

/** Checks the design and sums its budget, once. @throws as `sizeDesign` */
export function prepare(design: SizingDesign, options: SizeOptions): Prepared {
  const { channel, trimmers } = prepareTrim(design, options.rangeId)
  const combine = design.sizing?.combine ?? 'worst-case'
  const margin = design.sizing?.margin ?? 0.25
  const terms = budgetTerms(design)
  if (!(channel.targetV > 0) || !Number.isFinite(channel.targetV)) {
    refuse('invalid-document', '/target/residual/value', 'The target must be over 0.')
  }
  if (!(margin >= 0) || !Number.isFinite(margin)) {
    refuse('invalid-document', '/sizing/margin', `The margin is ${margin}; it must be at least 0.`)
  }
  const { measuredUnits } = options
  const trim =
    measuredUnits === undefined
      ? extentsFromBudget(terms, combine)
      : extentsFromUnits(terms, combine, channel.range, measuredUnits)
  if (measuredUnits === undefined && !asksAnything(trim.terms)) {
    refuse(
      'budget-empty',
      '/budget',
      'The budget has no initial or drift line over zero, so nothing is to be trimmed. Add a line, or size from measured units.',
    )
  }
  return { channel, trimmers, terms, trim, combine, margin }
}

function asksAnything({ gain, offset }: Terms): boolean {
  return [...gain, ...offset].some(({ limit, nominal }) => limit > 0 || nominal !== 0)
}

function refuse(code: 'budget-empty' | 'invalid-document', path: string, message: string): never {
  throw new OgeeError(code, message, { errors: [{ path, message }] })
}

function sizeOf({ channel, trimmers, trim, combine, margin }: Prepared, trimmer: Trimmer): Sized {
  const { range, targetV } = channel
  const row = nullingRow(trimmers, range, trimmer.which)
  const reach = requiredReach(trimmer, range, trim.terms, row, combine, margin)
  const outputPerV = Math.max(Math.abs(trimmer.endLow), Math.abs(trimmer.endFull))
  const sharing = trimmers.gain !== null && trimmers.offset !== null ? 2 : 1
  const requiredStepV = (2 * targetV) / (sharing * outputPerV)
  const bits = bitsFor(reach.highV - reach.lowV, requiredStepV)
  if (bits === null) {
    refuse(
      'invalid-document',
      `/adjusters/${trimmer.which}`,
      'Reach and step are too far apart for any number of bits.',
    )
  }
  const size: AdjusterSize = {
    requiredLowV: reach.lowV,
    requiredHighV: reach.highV,
    requiredStepV,
    requiredBits: bits,
    recommended: recommend(reach.lowV, reach.highV, bits, requiredStepV),
    ...judgeAvailable(trimmer, reach, requiredStepV, outputPerV),
    nominalV: trimmer.nominalV,
    outputPerV,
    centreV: reach.centre,
    reachBeforeMarginV: reach.size,
    effectTolerance: trimmer.tolerance,
  }
  return { trimmer, row, reach, outputPerV, size }
}

/**
 * The verdict of the whole: short when any adjuster is, coarse when any is, both when the two hold.
 * @example overall(['short', 'coarse']) // 'both'
 */
export function overall(verdicts: readonly SizeVerdict[]): SizeVerdict {
  const short = verdicts.some((verdict) => verdict === 'short' || verdict === 'both')
  const coarse = verdicts.some((verdict) => verdict === 'coarse' || verdict === 'both')
  if (short) return coarse ? 'both' : 'short'
  return coarse ? 'coarse' : 'covers'
}

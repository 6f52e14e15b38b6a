import type { FieldError } from '../../errors.ts'
import type { Distribution } from '../random/draw.ts'
import type { Design, PerAdjuster, Which } from '../types.ts'

/** What sizing reads of `ogee.design/1` beyond the rest of the solver, and what it answers (`ogee.size/1`). */

type LineBase = {
  name: string
  distribution: Distribution
  /** Standard deviations in the limit of a normal line. */
  k?: number | undefined
  when: 'initial' | 'drift' | 'noise'
}
export type GainLine = LineBase & {
  limitPpm: number
  nominalPpm?: number | undefined
  pivotV?: number | undefined
}
export type OffsetLine = LineBase & { limitV: number; nominalV?: number | undefined }

export type SizingDesign = Design & {
  measurement: Design['measurement'] & { points?: readonly number[] | undefined }
  budget?: { gain: readonly GainLine[]; offset: readonly OffsetLine[] } | undefined
  sizing?:
    | {
        combine?: 'worst-case' | 'rss' | undefined
        margin?: number | undefined
        temperatureSpanK?: number | undefined
      }
    | undefined
}

/** Errors of a unit with nothing loaded: offset at the offset point in V, slope in ppm. */
export type UnitError = { offsetErrorV: number; gainErrorPpm: number }

/** Units in the place of a budget's initial lines: mean ± factor · s. Made by `measuredUnits`. */
export type MeasuredUnits = { errors: readonly UnitError[]; factor: number }

export type Extents = {
  gain: { centrePpm: number; worstCasePpm: number; rssPpm: number; usedPpm: number }
  offset: { centreV: number; worstCaseV: number; rssV: number; usedV: number }
  /** Where the numbers come from: the budget, or measured units by a tolerance factor (drift lines stay the budget's). */
  from: 'budget' | 'measured-units'
  units: number | null
  toleranceFactor: number | null
}

export type SizeVerdict = 'covers' | 'short' | 'coarse' | 'both'
export type Span = { bits: number; lowV: number; highV: number }

export type AdjusterSize = {
  requiredLowV: number
  requiredHighV: number
  requiredStepV: number
  requiredBits: number
  /** At the node: `highV` is the voltage that code 2^bits would give. Null over 20 bits or where nothing is to be reached. */
  recommended: Span | null
  available: Span & { stepV: number; outputStepV: number }
  /** Available over required, less 1, on the tighter side; null where nothing is to be reached. */
  reachMargin: number | null
  /** Allowed over available step. */
  stepMargin: number
  spareBits: number
  verdict: SizeVerdict

  /** The side that `reachMargin` speaks of, and what ends the reach there. */
  tighterSide: 'low' | 'high' | null
  limitedBy: 'codes' | 'node' | null
  /** log2 of both margins. */
  reachSpareBits: number | null
  stepSpareBits: number
  nominalV: number
  /** E: volts at the output per volt at the node, where it is largest over the range. */
  outputPerV: number
  /** Of the error extents alone, at the node about nominal: no margin, no effect tolerance. */
  centreV: number
  reachBeforeMarginV: number
  /** On the tighter side, at the output. */
  requiredReachOutputV: number
  availableReachOutputV: number
  effectTolerance: number
}

export type ResidualLine = {
  name: string
  worstV: number
  standardV: number
  worstLsb: number
  worstPpm: number
  /** Of the worst-case sum; 0 where that is 0. */
  share: number
  /** The way by which it reaches the output. */
  path: Which | 'neither'
  kind:
    | 'quantising'
    | 'auxiliary-inl'
    | 'auxiliary-drift'
    | 'measurement'
    | 'instrument'
    | 'converter-inl'
    | 'budget'
    | 'not-trimmed'
  /** |nominal| of a budget line: it stands in both sums. */
  biasV: number
}

export type Residual = {
  lines: ResidualLine[]
  worstCaseV: number
  rssV: number
  worstCaseLsb: number
  rssLsb: number
  worstCasePpm: number
  rssPpm: number
  /** The end of the range with the larger worst-case sum. */
  atV: number
}

/** Trims until the target is met in the worst case, at most 9; null when not. */
export type Passes = { withNominalEffect: number | null; withMeasuredEffect: number | null }

export type SizeResult = {
  format: 'ogee.size/1'
  solver: string
  range: string
  lsbV: number
  targetV: number
  extents: Extents
  adjusters: PerAdjuster<AdjusterSize>
  residual: Residual
  passes: Passes
  /** Of the whole: what the adjusters' verdicts come to. */
  verdict: SizeVerdict
  combine: 'worst-case' | 'rss'
  margin: number
  /** What the design's author should know, each at the field that it is about. */
  remarks: FieldError[]
}

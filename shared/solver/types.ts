/**
 * What the solver reads and returns, as plain types. Names are those of `ogee.design/1`, `ogee.fit/1`,
 * `ogee.codes/1` and `ogee.verify/1`; the contract's schemas are assignable to and from these without a cast.
 * Volts, ohms, kelvin, ratios; ppm only in names that end in `Ppm`.
 */
export type Which = 'gain' | 'offset'
export type PerAdjuster<T> = { gain?: T | undefined; offset?: T | undefined }
export type Coding = 'straight-binary' | 'offset-binary' | 'twos-complement'
export type Method = 'best-fit' | 'minimax' | 'terminal'

export type Effect =
  | { kind: 'measured'; slopePerV: number; offsetPerV: number }
  | {
      kind: 'reference-summing'
      inputOhm: number
      adjustOhm: number
      referenceV: number
      inverting: boolean
      pivotV?: number | undefined
    }
  | { kind: 'output-summing'; feedbackOhm: number; adjustOhm: number; inverting: boolean }

export type Network =
  | { kind: 'direct' }
  | { kind: 'divider'; topOhm: number; bottomOhm: number }
  | { kind: 'shifted'; topOhm: number; shiftOhm: number; shiftV: number; bottomOhm?: number | undefined }

export type AdjustNode = {
  nominalV: number
  minV?: number | undefined
  maxV?: number | undefined
  inputOhm?: number | undefined
  returnV?: number | undefined
}

/** Auxiliary DAC: `lowV` is the voltage at code 0, `highV` the one that code 2^bits would give. */
export type AuxSource = {
  bits: number
  coding: Coding
  lowV: number
  highV: number
  inlLsb?: number | undefined
  driftPpmPerK?: number | undefined
  spanTolerance?: number | undefined
}

export type Adjuster = {
  effect: Effect
  effectTolerance?: number | undefined
  node: AdjustNode
  source: AuxSource
  network: Network
}

export type Converter = { bits: number; coding: Coding; inlLsb?: number | undefined }
export type Range = {
  id: string
  label?: string | undefined
  lowV: number
  highV: number
  offsetAt?: 'zero-volts' | 'low-end' | undefined
  effects?: PerAdjuster<Effect> | undefined
  sharedWith?: readonly string[] | undefined
}
export type LimitWithUnit = { value: number; unit: 'LSB' | 'ppm' | 'V' }
export type InstrumentLimits = { id?: string | null | undefined; gainPpm: number; offsetV: number }

/** The parts of `ogee.design/1` that the solver reads. */
export type Design = {
  converter: Converter
  ranges: readonly Range[]
  adjusters: PerAdjuster<Adjuster>
  target: { residual: LimitWithUnit }
  measurement: {
    method?: Method | undefined
    readings?: number | undefined
    noiseV?: number | undefined
    resolutionV?: number | undefined
    plausiblePercent?: number | undefined
    settleLimitLsb?: number | undefined
    instrument?: InstrumentLimits | undefined
  }
  decision?: { rule: 'simple' | 'guarded'; tolerance: LimitWithUnit } | undefined
}

export type MeasuredPoint = {
  code?: number | undefined
  word?: string | undefined
  target?: number | undefined
  measured?: number | undefined
  readings?: readonly number[] | undefined
  uncertainty?: number | undefined
  readAt?: string | undefined
  temperatureC?: number | undefined
}

/** `neutral`: nothing loaded. An adjuster that the pair leaves out counts as neutral, with a note. */
export type Applied = 'neutral' | PerAdjuster<number>

export type Residual = {
  code: number
  idealV: number
  measuredV: number
  errorV: number
  residualV: number
  residualLsb: number
}
export type Flag = {
  flag: 'outlier' | 'bow' | 'unsettled' | 'narrow' | 'inconsistent' | 'effect-off'
  code: number | null
  value: number | null
  limit: number | null
  unit: string | null
}
export type DofWhy = 'known-u' | 'two-points' | 'minimax' | 'terminal'

export type FitResult = {
  method: Method
  n: number
  dof: number | null
  dofWhy: DofWhy | null
  offsetErrorV: number
  gainErrorPpm: number
  fullScaleErrorV: number
  standardUncertainty: { offsetV: number; gainPpm: number; covarianceVPpm: number } | null
  expandedUncertainty: { offsetV: number; gainPpm: number; kOffset: number; kGain: number } | null
  residuals: Residual[]
  linearity: { maxV: number; maxLsb: number; maxPpm: number; atCode: number }
  chiSquared: number | null
  instrument: { id: string | null; gainPpm: number; offsetV: number } | null
  flags: Flag[]
  notes: string[]
}

export type Verdict = 'ok' | 'out-of-reach' | 'too-coarse' | 'suspect'
export type UsedEffect = {
  slopePerV: number
  offsetPerV: number
  tolerance: number
  source: 'design' | 'learned'
  factor: number
  why: string | null
}
export type Predicted = {
  offsetErrorV: number
  gainErrorPpm: number
  worstV: number
  worstLsb: number
  worstPpm: number
  atV: number
  expandedUncertaintyV: number | null
  /** What the effects' tolerances may add at the worse end, V. */
  effectV: number
}
export type Missing = { wantedV: number; limitV: number; by: 'codes' | 'node'; nearestCode: number | null }

/** The line of a range that keeps these codes; `predicted` is null when that range was not measured. */
export type SharedLine = {
  range: string
  change: { offsetErrorV: number; gainErrorPpm: number }
  predicted: { offsetErrorV: number; gainErrorPpm: number; worstV: number; atV: number } | null
}
export type TrimResult = {
  verdict: Verdict
  reasons: string[]
  codes: PerAdjuster<number> | null
  words: PerAdjuster<string> | null
  nodeV: PerAdjuster<number> | null
  exactNodeV: PerAdjuster<number>
  appliedNodeV: PerAdjuster<number>
  effects: PerAdjuster<UsedEffect>
  reachUsed: PerAdjuster<number | null>
  shortfall: (PerAdjuster<Missing> & { remainingWorstV: number }) | null
  predicted: Predicted | null
  notes: string[]
  /** Only where the range names others that share its hardware. */
  shared?: SharedLine[]
}

export type FitDocument = { format: 'ogee.fit/1'; solver: string; range: string; fit: FitResult }
export type CodesResult = {
  format: 'ogee.codes/1'
  solver: string
  range: string
  fit: FitResult
  trim: TrimResult
}

export type Outcome = 'pass' | 'conditional-pass' | 'conditional-fail' | 'fail'
export type JudgedPoint = {
  code: number
  idealV: number
  measuredV: number
  errorV: number
  errorLsb: number
  expandedUncertaintyV: number | null
  outcome: Outcome
  conformanceProbability: number | null
}
export type VerifyResult = {
  format: 'ogee.verify/1'
  solver: string
  range: string
  rule: 'simple' | 'guarded'
  toleranceV: number
  tur: number | null
  outcome: Outcome
  points: JudgedPoint[]
  worst: { code: number; errorV: number; errorLsb: number }
  fit: FitResult | null
  notes: string[]
}

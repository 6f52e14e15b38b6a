import type { PerAdjuster } from '../types.ts'

/** Share of good units after a pass, with its interval, and what became of the others. Ratios of all units. */
export type PassYield = {
  pass: number
  yield: number
  low95: number
  high95: number
  /** No codes: the unit asks more than the adjusters reach. */
  outOfReach: number
  /** Predicted worst error over the target; such a unit may still be within the tolerance. */
  tooCoarse: number
  /** In reach, and the true remaining error over the tolerance. yield + outOfReach + failing = 1. */
  failing: number
}

export type Histogram = {
  /** Lower end of the first bar and width of each, in the unit of what is counted. */
  from: number
  width: number
  counts: number[]
  /** Over the last bar. */
  over: number
}

export type CodesSpread = Histogram & { least: number | null; most: number | null; mean: number | null }

export type YieldResult = {
  format: 'ogee.yield/1'
  solver: string
  range: string
  seed: number
  /** Units simulated: fewer than asked for when stopped. */
  trials: number
  stopped: boolean
  effects: 'design' | 'learned'
  toleranceV: number
  toleranceLsb: number
  passes: PassYield[]
  /** Largest true |error| left after the last pass, of the units in reach. Null quantiles when there is none. */
  remainingLsb: {
    units: number
    quantiles: { probability: number; lsb: number | null }[]
    histogram: Histogram
  }
  /** Codes of the last pass, of the units in reach. */
  codes: PerAdjuster<CodesSpread>
  generator: string
  normalMethod: string
}

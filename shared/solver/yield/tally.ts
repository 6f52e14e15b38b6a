import type { Trimmer } from '../adjuster.ts'
import type { PerAdjuster } from '../types.ts'
import type { YieldPlan } from './plan.ts'
import type { Trimmed } from './trim-unit.ts'
import type { CodesSpread, Histogram, PassYield } from './types.ts'
import { wilson } from './wilson.ts'

/** Bars of the remaining error up to 1.2 times the tolerance, and of the codes over the whole auxiliary DAC. */
const ERROR_BARS = 60
const CODE_BARS = 64
const PROBABILITIES = [0.05, 0.25, 0.5, 0.75, 0.9, 0.95, 0.99, 0.999, 1]

type PassCount = { good: number; outOfReach: number; tooCoarse: number; failing: number }
type CodeCount = { counts: number[]; width: number; least: number; most: number; sum: number }

/** Counts of a running simulation. */
export type Tally = {
  learns: boolean
  passes: PassCount[]
  /** Remaining errors in LSB of the units in reach, in their order; `finished` of them. */
  remaining: Float64Array
  finished: number
  counts: number[]
  over: number
  barLsb: number
  gain: CodeCount | null
  offset: CodeCount | null
}

export function emptyTally(plan: YieldPlan, trials: number, passes: number, learns: boolean): Tally {
  const { gain, offset } = plan.trim.trimmers
  return {
    learns,
    passes: Array.from({ length: passes }, () => ({ good: 0, outOfReach: 0, tooCoarse: 0, failing: 0 })),
    remaining: new Float64Array(trials),
    finished: 0,
    counts: new Array<number>(ERROR_BARS).fill(0),
    over: 0,
    barLsb: (1.2 * plan.toleranceV) / plan.trim.channel.range.lsbV / ERROR_BARS,
    gain: gain === null ? null : emptyCodes(gain),
    offset: offset === null ? null : emptyCodes(offset),
  }
}

function emptyCodes({ count }: Trimmer): CodeCount {
  const bars = Math.min(CODE_BARS, count)
  return {
    counts: new Array<number>(bars).fill(0),
    width: count / bars,
    least: count,
    most: -1,
    sum: 0,
  }
}

export function countPass({ passes }: Tally, pass: number, tooCoarse: boolean, good: boolean): void {
  const count = passes[pass]!
  if (tooCoarse) count.tooCoarse += 1
  if (good) count.good += 1
  else count.failing += 1
}

/** A unit that went through all passes. */
export function finishUnit(tally: Tally, plan: YieldPlan, codes: Trimmed, errorV: number): void {
  const lsb = errorV / plan.trim.channel.range.lsbV
  tally.remaining[tally.finished] = lsb
  tally.finished += 1
  const bar = Math.floor(lsb / tally.barLsb)
  if (bar < ERROR_BARS) tally.counts[bar]! += 1
  else tally.over += 1
  if (tally.gain !== null && codes.gain !== null) countCode(tally.gain, codes.gain)
  if (tally.offset !== null && codes.offset !== null) countCode(tally.offset, codes.offset)
}

function countCode(count: CodeCount, code: number): void {
  count.counts[Math.floor(code / count.width)]! += 1
  count.sum += code
  if (code < count.least) count.least = code
  if (code > count.most) count.most = code
}

/** Shares of each pass with their Wilson intervals. */
export function passYields({ passes }: Tally, trials: number): PassYield[] {
  return passes.map(({ good, outOfReach, tooCoarse, failing }, i) => {
    const { low, high } = wilson(good, trials)
    return {
      pass: i + 1,
      yield: good / trials,
      low95: low,
      high95: high,
      outOfReach: outOfReach / trials,
      tooCoarse: tooCoarse / trials,
      failing: failing / trials,
    }
  })
}

export function remainingOf({ remaining, finished, counts, over, barLsb }: Tally) {
  const sorted = remaining.slice(0, finished).sort()
  const quantiles = PROBABILITIES.map((probability) => ({
    probability,
    lsb: finished === 0 ? null : sorted[Math.max(0, Math.ceil(probability * finished) - 1)]!,
  }))
  const histogram: Histogram = { from: 0, width: barLsb, counts: [...counts], over }
  return { units: finished, quantiles, histogram }
}

export function codeSpreads(tally: Tally): PerAdjuster<CodesSpread> {
  const result: PerAdjuster<CodesSpread> = {}
  for (const which of ['gain', 'offset'] as const) {
    const count = tally[which]
    if (count === null) continue
    const some = tally.finished > 0
    result[which] = {
      from: 0,
      width: count.width,
      counts: [...count.counts],
      over: 0,
      least: some ? count.least : null,
      most: some ? count.most : null,
      mean: some ? count.sum / tally.finished : null,
    }
  }
  return result
}

import { type ConverterRange, converterRange, limitInVolts, rangeOf } from './converter.ts'
import type { PlannedNoise } from './line.ts'
import { type PointRules, pointRules } from './point-rules.ts'
import type { Design, InstrumentLimits, Method } from './types.ts'

/** A range of a design, checked once and ready to fit any number of units. Adjusters are prepared apart. */
export type Channel = {
  design: Design
  range: ConverterRange
  rules: PointRules
  noise: PlannedNoise
  settleLimitLsb: number
  method: Method
  instrument: InstrumentLimits | null
  /** Target of the residual, V. */
  targetV: number
  /** Other ranges that keep this one's codes. */
  sharedWith: readonly string[]
}

/**
 * Checks a design's range once, so that many units can be fitted without doing it again.
 * @param rangeId may be left out where the design has one range
 * @throws as `converterRange`
 * @example prepareChannel(unipolar18).range.id // 'u10'
 */
export function prepareChannel(design: Design, rangeId?: string): Channel {
  const { measurement } = design
  const range = converterRange(design, rangeId)
  return {
    design,
    range,
    rules: pointRules(measurement),
    noise: { noiseV: measurement.noiseV ?? null, readings: measurement.readings ?? 1 },
    settleLimitLsb: measurement.settleLimitLsb ?? 0.25,
    method: measurement.method ?? 'best-fit',
    instrument: measurement.instrument ?? null,
    targetV: limitInVolts(design.target.residual, range),
    sharedWith: rangeOf(design, rangeId).sharedWith ?? [],
  }
}

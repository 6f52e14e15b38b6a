import { spreadOf } from './spread.ts'

/** d2 for ranges of two: the mean range of two normal values in standard deviations (NIST/SEMATECH e-Handbook 6.3.2). */
const D2 = 1.128

export type IndividualsChart = {
  mean: number
  /** Mean of the distances between neighbours. */
  meanMovingRange: number
  lower: number
  upper: number
}

/**
 * The individuals chart: mean ± (3/1.128)·mean moving range.
 * @param values in the order in which they were read, one unit; finite
 * @returns in that unit; null under two values, where nothing moves
 * @throws not-finite
 * Source: NIST/SEMATECH e-Handbook of Statistical Methods, 6.3.2.2; solver.md section 10.
 * @example individualsChart([1, 3])?.meanMovingRange // 2
 */
export function individualsChart(values: readonly number[]): IndividualsChart | null {
  const spread = spreadOf(values)
  if (spread === null || values.length < 2) return null
  let sum = 0
  for (let i = 1; i < values.length; i++) sum += Math.abs(values[i]! - values[i - 1]!)
  const meanMovingRange = sum / (values.length - 1)
  const reach = (3 / D2) * meanMovingRange
  const { mean } = spread
  return { mean, meanMovingRange, lower: mean - reach, upper: mean + reach }
}

import { OgeeError } from '../../errors.ts'
import { chiSquaredUpper } from '../distribution/chi-squared.ts'
import { normalUpper } from '../distribution/normal.ts'

/** Share of all units that the interval holds, and the confidence that it does. */
export type ToleranceRule = { share: number; confidence: number }
export const usualTolerance: ToleranceRule = { share: 0.99, confidence: 0.95 }

/**
 * The two-sided normal tolerance factor k: mean ± k·s of n units holds the share p of all units with confidence γ.
 * @param units n >= 2
 * @param rule p and γ, each over 0 and under 1
 * @returns k = z((1+p)/2)·√(ν(1 + 1/n)/χ²), ν = n - 1, χ² exceeded with probability γ
 * @throws too-few-units
 * Source: W. G. Howe (1969), J. Am. Stat. Assoc. 64; NIST/SEMATECH e-Handbook of Statistical Methods, 7.2.6.3.
 * @example toleranceFactor(43, { share: 0.9, confidence: 0.99 }) // 2.2173...
 */
export function toleranceFactor(units: number, rule: ToleranceRule = usualTolerance): number {
  if (!(units >= 2)) {
    const have = units === 1 ? 'One unit' : 'No unit'
    throw new OgeeError('too-few-units', `${have}: two are the least that show a spread. Measure more.`)
  }
  const free = units - 1
  const z = normalUpper((1 - rule.share) / 2)
  return z * Math.sqrt((free * (1 + 1 / units)) / chiSquaredUpper(rule.confidence, free))
}

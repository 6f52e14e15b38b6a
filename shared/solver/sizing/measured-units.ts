import { type ToleranceRule, toleranceFactor, usualTolerance } from './tolerance-factor.ts'
import type { MeasuredUnits, UnitError } from './types.ts'

/**
 * Measured units in the form that sizing takes them, with the factor for as many as there are.
 * @param errors at least two, as measured with nothing loaded; V and ppm
 * @param rule share of all units that the interval holds, and the confidence that it does; 0.99 and 0.95 when left out
 * @throws too-few-units
 * Source: solver.md section 6; NIST/SEMATECH e-Handbook of Statistical Methods, 7.2.6.3.
 * @example measuredUnits(units.errors).factor === toleranceFactor(3) // true
 */
export function measuredUnits(
  errors: readonly UnitError[],
  rule: ToleranceRule = usualTolerance,
): MeasuredUnits {
  return { errors, factor: toleranceFactor(errors.length, rule) }
}

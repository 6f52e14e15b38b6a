import { OgeeError } from '../../errors.ts'

/** How some values lie: how many, their mean, and their standard deviation (n - 1), null under two values. */
export type Spread = { n: number; mean: number; s: number | null }

/**
 * Mean and standard deviation, about the first value so that equal values have exactly that mean and no spread.
 * @param values of one unit, any finite size, in any order (sums run as given)
 * @returns null where there is no value; `s` null where there is one
 * @throws not-finite
 * Source: NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.5.6 (standard deviation), with two passes.
 * @example spreadOf([1, 2, 3]) // { n: 3, mean: 2, s: 1 }
 */
export function spreadOf(values: readonly number[]): Spread | null {
  const first = values[0]
  if (first === undefined) return null
  let shift = 0
  for (const value of values) {
    if (!Number.isFinite(value))
      throw new OgeeError('not-finite', 'A value of the lot is not a finite number.')
    shift += value - first
  }
  shift /= values.length
  if (values.length === 1) return { n: 1, mean: first, s: null }
  let squares = 0
  for (const value of values) squares += (value - first - shift) * (value - first - shift)
  return { n: values.length, mean: first + shift, s: Math.sqrt(squares / (values.length - 1)) }
}

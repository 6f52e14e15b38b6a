import { normalBelow } from '../distribution/normal.ts'

/** Limits of an error, lower one first, in the unit of the values that they stand against. */
export type Limits = { low: number; high: number }
export type Capability = { cp: number; cpk: number; cpl: number; cpu: number }

/**
 * How a spread fits between limits: Cp = (high - low)/6s, Cpl = (mean - low)/3s, Cpu = (high - mean)/3s, Cpk the smaller.
 * @param mean, s, limits in one unit; s over zero
 * @returns ratios; null where s does not exist or is zero, since then every ratio is without bound
 * Source: NIST/SEMATECH e-Handbook of Statistical Methods, 6.1.6.
 * @example capability(16, 2, { low: 8, high: 20 })?.cp // 1
 */
export function capability(mean: number, s: number | null, { low, high }: Limits): Capability | null {
  if (s === null || s === 0) return null
  const cpl = (mean - low) / (3 * s)
  const cpu = (high - mean) / (3 * s)
  return { cp: (high - low) / (6 * s), cpk: Math.min(cpl, cpu), cpl, cpu }
}

/**
 * The share of units expected beyond the limits when their error is normal with that mean and standard deviation.
 * @returns a ratio from 0 to 1; with no spread 0 or 1; null where s does not exist
 * Source: solver.md section 10; NIST/SEMATECH e-Handbook 6.1.6 (translating capability into rejects).
 * @example expectedOutside(0, 1, { low: 0, high: 0 }) // 1
 */
export function expectedOutside(mean: number, s: number | null, { low, high }: Limits): number | null {
  if (s === null) return null
  if (s === 0) return mean < low || mean > high ? 1 : 0
  return normalBelow((low - mean) / s) + normalBelow((mean - high) / s)
}

/** z of a two-sided 95 % interval (solver.md section 9). */
const Z = 1.959963984540054

/**
 * The Wilson 95 % interval of a share.
 * @param good units; @param all units, at least 1
 * @returns ratios between 0 and 1
 * Source: E. B. Wilson (1927), J. Am. Stat. Assoc. 22; NIST/SEMATECH e-Handbook of Statistical Methods, 7.2.4.1.
 * @example wilson(0, 10).high // 0.2775...
 */
export function wilson(good: number, all: number): { low: number; high: number } {
  const p = good / all
  const z2 = (Z * Z) / all
  const centre = p + z2 / 2
  const half = Z * Math.sqrt((p * (1 - p) + z2 / 4) / all)
  const low = (centre - half) / (1 + z2)
  const high = (centre + half) / (1 + z2)
  // The ends of a share of none or all are exactly 0 and 1; rounding would miss them.
  return { low: good === 0 ? 0 : Math.max(low, 0), high: good === all ? 1 : Math.min(high, 1) }
}

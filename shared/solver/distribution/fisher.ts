import { betaFront, betaRatio } from './beta.ts'
import { chiSquaredUpper } from './chi-squared.ts'
import { ln } from './elementary.ts'

/**
 * The value that F with (dof1, dof2) degrees of freedom exceeds with probability `tail`.
 * @param tail upper tail, 0 < tail < 1
 * @param dof1 of the numerator, real, > 0, finite
 * @param dof2 of the denominator, real, > 0; Infinity gives χ²/dof1
 * @returns F, relative error about 1e-12 (1e-10 for millions of degrees of freedom)
 * Source: NIST DLMF 8.17 (the tail of F is an incomplete beta ratio).
 * @example fisherUpper(0.5, 4, 4) // 1
 */
export function fisherUpper(tail: number, dof1: number, dof2: number): number {
  if (dof2 === Number.POSITIVE_INFINITY) return chiSquaredUpper(tail, dof1) / dof1
  if (tail > 0.5) return 1 / fisherUpper(1 - tail, dof2, dof1)
  const a = dof1 / 2
  const b = dof2 / 2
  let f = 1
  for (let i = 0; i < 400; i++) {
    const sum = dof1 * f + dof2
    const x = (dof1 * f) / sum
    const y = dof2 / sum
    const p = betaRatio(b, a, y, x)
    const step = (ln(p / tail) * p) / betaFront(a, b, x, y)
    f *= step > 1 ? 2 : step < -0.5 ? 0.5 : 1 + step
    if (step < 1e-14 && step > -1e-14) break
  }
  return f
}

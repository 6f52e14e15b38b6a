import { exp, ln, SQRT2PI, SQRTPI } from './elementary.ts'
import { gammaUpper } from './gamma.ts'
import { remember } from './remember.ts'

/**
 * erfc(x) = 1 - erf(x), any finite x. Under 2 by the series of erf whose terms are all positive (NIST DLMF 7.6.2),
 * above by the upper gamma ratio Q(1/2, x²). Relative error under 1e-13.
 * @example erfc(0) // 1
 */
export function erfc(x: number): number {
  if (x < 0) return 2 - erfc(-x)
  if (x >= 2) return gammaUpper(0.5, x * x)
  let term = x
  let sum = x
  for (let n = 1; term > sum * 1e-17; n++) {
    term *= (2 * x * x) / (2 * n + 1)
    sum += term
  }
  return 1 - (2 / SQRTPI) * exp(-x * x) * sum
}

/**
 * Φ(z), the normal distribution function.
 * @example normalBelow(0) // 0.5
 */
export function normalBelow(z: number): number {
  return 0.5 * erfc(-z * Math.SQRT1_2)
}

/**
 * The z that a standard normal value exceeds with probability `tail` (0 < tail < 1); relative error about 1e-13.
 * Start: Abramowitz and Stegun 26.2.23; then third-order steps.
 * @example normalUpper(0.5) // 0
 */
export const normalUpper: (tail: number) => number = (tail) => rememberedNormal(tail, 0)

const rememberedNormal = remember((tail) => {
  if (tail === 0.5) return 0
  if (tail > 0.5) return -normalUpper(1 - tail)
  const t = Math.sqrt(-2 * ln(tail))
  let z =
    t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)))
  for (let i = 0; i < 20; i++) {
    const e = ((0.5 * erfc(z * Math.SQRT1_2) - tail) * SQRT2PI) / exp(-0.5 * z * z)
    const step = e * (1 + 0.5 * z * e)
    z += step
    if (step < 1e-7 && step > -1e-7) break
  }
  return z
})

import { exp, ln, ln1p, ln1pMinus, SQRT2PI } from './elementary.ts'

/** Γ and the incomplete gamma ratios, written so that nothing large cancels. Sources: NIST DLMF 5.11, 8.7, 8.9. */

/** ln of Γ(a)/(√(2π) a^(a-1/2) e^-a): Stirling's remainder (DLMF 5.11.1), a > 0. */
export function stirlingRest(a: number): number {
  let rest = 0
  let b = a
  while (b < 10) {
    rest += (b + 0.5) * ln1p(1 / b) - 1
    b += 1
  }
  const v = 1 / (b * b)
  const series =
    1 / 12 - v * (1 / 360 - v * (1 / 1260 - v * (1 / 1680 - v * (1 / 1188 - v * (691 / 360360 - v / 156)))))
  return rest + series / b
}

/** Γ(a + 1/2)/Γ(a), a > 0. */
export function halfGammaRatio(a: number): number {
  let factor = 1
  let b = a
  while (b < 10) {
    factor *= b / (b + 0.5)
    b += 1
  }
  const log = b * ln1pMinus(0.5 / b) + (stirlingRest(b + 0.5) - stirlingRest(b))
  return factor * Math.sqrt(b) * exp(log)
}

/** x^a e^-x/Γ(a), a > 0, x > 0. */
export function gammaFront(a: number, x: number): number {
  const u = (x - a) / a
  // Far below the mode 1 + u has lost the digits of x, so the ratio itself is used.
  const log = u < -0.35 ? ln(x / a) - u : ln1pMinus(u)
  return (Math.sqrt(a) / SQRT2PI) * exp(a * log - stirlingRest(a))
}

/** Lower ratio P(a, x) by its series (all terms positive); good for x < a + 1. */
function lowerSeries(a: number, x: number): number {
  let term = 1 / a
  let sum = term
  for (let n = 1; n < 10_000 && term > sum * 1e-17; n++) {
    term *= x / (a + n)
    sum += term
  }
  return sum * gammaFront(a, x)
}

/** Upper ratio Q(a, x) by Legendre's continued fraction (DLMF 8.9.2), modified Lentz; good for x >= a + 1. */
function upperFraction(a: number, x: number): number {
  const tiny = 1e-300
  let b = x + 1 - a
  let c = 1 / tiny
  let d = 1 / b
  let h = d
  for (let i = 1; i < 10_000; i++) {
    const an = -i * (i - a)
    b += 2
    d = an * d + b
    if (d === 0) d = tiny
    c = b + an / c
    if (c === 0) c = tiny
    d = 1 / d
    const delta = d * c
    h *= delta
    if (delta - 1 < 1e-16 && 1 - delta < 1e-16) break
  }
  return h * gammaFront(a, x)
}

/**
 * Lower incomplete gamma ratio P(a, x), a > 0, x >= 0.
 * @example gammaLower(1, 0) // 0
 */
export function gammaLower(a: number, x: number): number {
  if (x <= 0) return 0
  return x < a + 1 ? lowerSeries(a, x) : 1 - upperFraction(a, x)
}

/**
 * Upper incomplete gamma ratio Q(a, x) = 1 - P(a, x), without loss in the tail.
 * @example gammaUpper(1, 0) // 1
 */
export function gammaUpper(a: number, x: number): number {
  if (x <= 0) return 1
  return x < a + 1 ? 1 - lowerSeries(a, x) : upperFraction(a, x)
}

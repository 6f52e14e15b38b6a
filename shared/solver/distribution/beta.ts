import { exp, ln, ln1pMinus, SQRT2PI } from './elementary.ts'
import { stirlingRest } from './gamma.ts'

/** ln(ratio) - u, ratio = 1 + u. Far below 1 the ratio keeps digits of a small x or y that u has lost. */
function excess(u: number, ratio: number): number {
  return u < -0.35 ? ln(ratio) - u : ln1pMinus(u)
}

/**
 * x^a y^b/B(a, b) with y = 1 - x given too;
 * a·ln(x/x0) + b·ln(y/y0) about the mode, so nothing large cancels
 * (the linear terms of the two cancel exactly and are left out). */
export function betaFront(a: number, b: number, x: number, y: number): number {
  const d = x * b - y * a
  const log = a * excess(d / a, (x * (a + b)) / a) + b * excess(-d / b, (y * (a + b)) / b)
  const rest = stirlingRest(a + b) - stirlingRest(a) - stirlingRest(b)
  return (Math.sqrt((a / (a + b)) * b) / SQRT2PI) * exp(log + rest)
}

/**
 * The continued fraction of the incomplete beta ratio (NIST DLMF 8.17.22), modified Lentz.
 * Converges fast for x < (a + 1)/(a + b + 2); I_x(a, b) = front/a times this.
 */
export function betaFraction(a: number, b: number, x: number): number {
  const tiny = 1e-300
  let c = 1
  let d = 1 - ((a + b) * x) / (a + 1)
  if (d === 0) d = tiny
  d = 1 / d
  let h = d
  for (let m = 1; m < 20_000; m++) {
    const a2 = a + 2 * m
    const even = (m * (b - m) * x) / ((a2 - 1) * a2)
    d = 1 + even * d
    if (d === 0) d = tiny
    c = 1 + even / c
    if (c === 0) c = tiny
    d = 1 / d
    h *= d * c
    const odd = (-(a + m) * (a + b + m) * x) / (a2 * (a2 + 1))
    d = 1 + odd * d
    if (d === 0) d = tiny
    c = 1 + odd / c
    if (c === 0) c = tiny
    d = 1 / d
    const delta = d * c
    h *= delta
    if (delta - 1 < 1e-16 && 1 - delta < 1e-16) break
  }
  return h
}

/** Incomplete beta ratio I_x(a, b), y = 1 - x given too, a and b > 0. */
export function betaRatio(a: number, b: number, x: number, y: number): number {
  if (x <= 0) return 0
  if (y <= 0) return 1
  const front = betaFront(a, b, x, y)
  if (x * (a + b + 2) < a + 1) return (front * betaFraction(a, b, x)) / a
  return 1 - (front * betaFraction(b, a, y)) / b
}

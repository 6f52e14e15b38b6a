import { betaFraction } from './beta.ts'
import { exp, ln, ln1p, SQRTPI } from './elementary.ts'
import { halfGammaRatio } from './gamma.ts'
import { normalUpper } from './normal.ts'
import { remember } from './remember.ts'

/**
 * The t that Student's t with `dof` degrees of freedom exceeds with probability `tail`: t(1 - tail, dof).
 * @param tail upper tail, 0 < tail < 1
 * @param dof degrees of freedom, real, >= 1; Infinity gives the normal quantile
 * @returns t, relative error about 1e-13
 * Source: definition in JCGM 100:2008 G.3; start by G. W. Hill, Algorithm 396, Comm. ACM 13 (1970); for many
 * degrees of freedom by the expansion of Abramowitz and Stegun 26.7.5 with the fifth term of Fisher and Cornish (1960).
 * @example studentUpper(0.5, 3) // 0
 */
export function studentUpper(tail: number, dof: number): number {
  // Whole numbers come again from unit to unit; the real ones of Welch-Satterthwaite never do.
  return dof === Math.floor(dof) ? atWhole(tail, dof) : compute(tail, dof)
}

const atWhole = remember(compute)

function compute(tail: number, dof: number): number {
  if (tail === 0.5) return 0
  if (tail > 0.5) return -studentUpper(1 - tail, dof)
  const z = normalUpper(tail)
  if (dof === Number.POSITIVE_INFINITY) return z
  // From here on the first term left out of the expansion is under 1e-14 of t.
  if (dof >= (z < 2.6 ? 200 : z < 4 ? 1000 : 5000)) return expansion(z, 1 / dof)
  return polish(start(tail, dof, z), tail, dof)
}

function start(tail: number, dof: number, z: number): number {
  if (dof > 20 && z < 2.6) return expansion(z, 1 / dof)
  return dof > 3 && tail > 0.01 && dof !== Math.floor(dof) ? between(tail, dof) : hillStart(tail, dof)
}

/**
 * A start for dof between whole numbers: the cubic in 1/dof through the four whole ones about it, which are remembered.
 * Close enough that one step is all it takes.
 */
function between(tail: number, dof: number): number {
  const n = Math.floor(dof)
  const v = 1 / dof
  const a = 1 / (n - 1)
  const b = 1 / n
  const c = 1 / (n + 1)
  const d = 1 / (n + 2)
  const va = v - a
  const vb = v - b
  const vc = v - c
  const vd = v - d
  return (
    (studentUpper(tail, n - 1) * vb * vc * vd) / ((a - b) * (a - c) * (a - d)) +
    (studentUpper(tail, n) * va * vc * vd) / ((b - a) * (b - c) * (b - d)) +
    (studentUpper(tail, n + 1) * va * vb * vd) / ((c - a) * (c - b) * (c - d)) +
    (studentUpper(tail, n + 2) * va * vb * vc) / ((d - a) * (d - b) * (d - c))
  )
}

/** Abramowitz and Stegun 26.7.5 in v = 1/dof, one term more. */
function expansion(z: number, v: number): number {
  const y = z * z
  const g1 = (y + 1) / 4
  const g2 = (3 + y * (16 + y * 5)) / 96
  const g3 = (-15 + y * (17 + y * (19 + y * 3))) / 384
  const g4 = (-945 + y * (-1920 + y * (1482 + y * (776 + y * 79)))) / 92160
  const g5 = (17955 + y * (-765 + y * (-1782 + y * (930 + y * (339 + y * 27))))) / 368640
  return z * (1 + v * (g1 + v * (g2 + v * (g3 + v * (g4 + v * g5)))))
}

/**
 * Steps on the tail by the series of the quantile function to the third power of e (the error left is of its fourth),
 * until e is so small that the next step would not be seen.
 */
function polish(from: number, tail: number, dof: number): number {
  const a = dof / 2
  const ratio = halfGammaRatio(a) / SQRTPI
  let t = from
  for (let i = 0; i < 30; i++) {
    const t2 = t * t
    const r = t2 / dof
    const front = exp(-a * ln1p(r)) * Math.sqrt(r / (1 + r)) * ratio
    const upper =
      t2 > 3
        ? (0.5 * front * betaFraction(a, 0.5, 1 / (1 + r))) / a
        : 0.5 - front * betaFraction(0.5, a, r / (1 + r))
    // The density is front/t, its logarithmic slope -psi.
    const e = ((upper - tail) * t) / front
    const sum = dof + t2
    const psi = ((dof + 1) * t) / sum
    const slope = ((dof + 1) * (dof - t2)) / (sum * sum)
    const next = t + e * (1 + e * (psi / 2 + (e * (2 * psi * psi + slope)) / 6))
    t = next > 0 ? next : t / 2
    const seen = Math.abs(e) * (1 + psi)
    if (seen < 3e-4) break
  }
  return t
}

function hillStart(tail: number, n: number): number {
  const p = 2 * tail
  const a = 1 / (n - 0.5)
  const b = 48 / (a * a)
  let c = ((20700 * (a / b) - 98) * a - 16) * a + 96.36
  const d = ((94.5 / (b + c) - 3) / b + 1) * Math.sqrt(a * (Math.PI / 2)) * n
  let y = exp((2 / n) * ln(d * p))
  if (y > 0.05 + a) {
    const x = -normalUpper(tail)
    y = x * x
    if (n < 5) c += 0.3 * (n - 4.5) * (x + 0.6)
    c += (((0.05 * d * x - 5) * x - 7) * x - 2) * x + b
    y = (((((0.4 * y + 6.3) * y + 36) * y + 94.5) / c - y - 3) / b + 1) * x
    y = a * y * y
    y = y > 0.002 ? exp(y) - 1 : 0.5 * y * y + y
  } else {
    const inner = ((n + 6) / (n * y) - 0.089 * d - 0.822) * (n + 2) * 3
    y = ((1 / inner + 0.5 / (n + 4)) * y - 1) * ((n + 1) / (n + 2)) + 1 / y
  }
  return Math.sqrt(n * y)
}

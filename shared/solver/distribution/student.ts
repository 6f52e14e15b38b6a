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
 * Source: definition in JCGM 100:2008 G.3; start by G. W. Hill, Algorithm 396, Comm. ACM 13 (1970); from 5000
 * degrees of freedom on by the expansion of Abramowitz and Stegun 26.7.5.
 * @example studentUpper(0.5, 3) // 0
 */
export const studentUpper: (tail: number, dof: number) => number = remember((tail, dof) => {
  if (tail === 0.5) return 0
  if (tail > 0.5) return -studentUpper(1 - tail, dof)
  if (dof === Number.POSITIVE_INFINITY) return normalUpper(tail)
  if (dof >= 5000) return expansion(normalUpper(tail), 1 / dof)
  return polish(hillStart(tail, dof), tail, dof)
})

/** Abramowitz and Stegun 26.7.5 in v = 1/dof. */
function expansion(z: number, v: number): number {
  const y = z * z
  const g1 = (y + 1) / 4
  const g2 = (3 + y * (16 + y * 5)) / 96
  const g3 = (-15 + y * (17 + y * (19 + y * 3))) / 384
  const g4 = (-945 + y * (-1920 + y * (1482 + y * (776 + y * 79)))) / 92160
  return z * (1 + v * (g1 + v * (g2 + v * (g3 + v * g4))))
}

/** Third-order steps on the tail until the last one is so small that the next would not be seen. */
function polish(start: number, tail: number, dof: number): number {
  const a = dof / 2
  const ratio = halfGammaRatio(a) / SQRTPI
  let t = start
  for (let i = 0; i < 30; i++) {
    const r = (t * t) / dof
    const x = 1 / (1 + r)
    const y = r / (1 + r)
    const front = exp(-a * ln1p(r)) * Math.sqrt(y) * ratio
    const upper =
      t * t > 3 ? (0.5 * front * betaFraction(a, 0.5, x)) / a : 0.5 - front * betaFraction(0.5, a, y)
    // density = front/t: f(t) dt = front dt/t
    const e = ((upper - tail) * t) / front
    const step = e * (1 + (0.5 * e * t * (dof + 1)) / (dof + t * t))
    const next = t + step
    t = next > 0 ? next : t / 2
    if (step < t * 1e-6 && step > -t * 1e-6) break
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

/**
 * Natural logarithm and exponential from + - * / alone, so that every engine gives the same bits (the built-in
 * ones may differ between engines). Relative error a few 1e-16. Constants: the hi/lo split of ln 2 as in any
 * double-precision argument reduction; series of W. J. Cody and W. Waite, Software Manual for the Elementary Functions.
 */
const LN2_HI = 0.6931471803691238
const LN2_LO = 1.9082149292705877e-10
export const SQRT2PI = 2.5066282746310007
export const SQRTPI = 1.772453850905516

/** 2^(2^i) and its inverse for i = 9 ... 0, by repeated squaring: exact. */
const UP = new Float64Array(10)
const DOWN = new Float64Array(10)
for (let i = 0, up = 2, down = 0.5; i < 10; i++) {
  UP[9 - i] = up
  DOWN[9 - i] = down
  up *= up
  down *= down
}

/** artanh(f)/f - 1 - without its first term: f²/3 + f⁴/5 + ... for |f| <= 0.25, to 1e-17. */
function atanhTail(f2: number): number {
  let sum = 1 / 29
  for (let k = 27; k >= 3; k -= 2) sum = sum * f2 + 1 / k
  return sum * f2
}

/**
 * ln x for x > 0.
 * @example ln(1) // 0
 */
export function ln(x: number): number {
  let m = x
  let k = 0
  for (let i = 0, step = 512; i < 10; i++, step /= 2) {
    if (m >= UP[i]!) {
      m *= DOWN[i]!
      k += step
    } else if (m * UP[i]! < 2) {
      m *= UP[i]!
      k -= step
    }
  }
  if (m > Math.SQRT2) {
    m *= 0.5
    k += 1
  }
  const f = (m - 1) / (m + 1)
  return k * LN2_HI + (k * LN2_LO + 2 * f * (1 + atanhTail(f * f)))
}

/**
 * ln(1 + u) for u > -1, without loss for small u.
 * @example ln1p(0) // 0
 */
export function ln1p(u: number): number {
  if (u > 0.5 || u < -0.35) return ln(1 + u)
  const f = u / (2 + u)
  return 2 * f * (1 + atanhTail(f * f))
}

/**
 * ln(1 + u) - u for u > -1, without loss for small u: with f = u/(2 + u), 2f - u = -f·u.
 * @example ln1pMinus(0) // 0
 */
export function ln1pMinus(u: number): number {
  if (u > 0.5 || u < -0.35) return ln(1 + u) - u
  const f = u / (2 + u)
  return -f * u + 2 * f * atanhTail(f * f)
}

/**
 * e^x; 0 under -745, Infinity over 709.78 (callers stay inside).
 * @example exp(0) // 1
 */
export function exp(x: number): number {
  if (x < -745.2) return 0
  if (x > 709.78) return Number.POSITIVE_INFINITY
  const k = Math.floor(x / LN2_HI + 0.5)
  const r = x - k * LN2_HI - k * LN2_LO
  let sum = 1
  for (let i = 14; i >= 1; i--) sum = 1 + (sum * r) / i
  return scale(sum, k)
}

/** v·2^k. Two halves, so that neither factor overflows where the product does not. */
function scale(v: number, k: number): number {
  const half = k < 0 ? -Math.floor(-k / 2) : Math.floor(k / 2)
  return v * powerOfTwo(half) * powerOfTwo(k - half)
}

/**
 * 2^k for whole |k| <= 1022, exactly.
 * @example powerOfTwo(-3) // 0.125
 */
export function powerOfTwo(k: number): number {
  let rest = k < 0 ? -k : k
  const factors = k < 0 ? DOWN : UP
  let result = 1
  for (let i = 0, step = 512; i < 10; i++, step /= 2) {
    if (rest >= step) {
      result *= factors[i]!
      rest -= step
    }
  }
  return result
}

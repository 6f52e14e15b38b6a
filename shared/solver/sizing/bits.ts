import { ln, powerOfTwo } from '../distribution/elementary.ts'

/** Forgives the rounding of a span that is a whole number of steps (solver.md section 6). */
export const SLACK = 1e-9

/**
 * Bits that a span needs: the smallest n >= 1 with span <= step·(2^n - 1), found by doubling; null over 1000.
 * @param spanV at least 0; @param stepV over 0
 * Source: solver.md section 6.
 * @example bitsFor(1.5, 0.1) // 4
 */
export function bitsFor(spanV: number, stepV: number): number | null {
  for (let n = 1, count = 2; n <= 1000; n++, count *= 2) {
    if (spanV <= stepV * (count - 1) * (1 + SLACK)) return n
  }
  return null
}

/**
 * ⌊log2 of a ratio⌋ by doubling and halving, so that a whole power is never lost to rounding (slack 1e-9).
 * @param ratio over 0, finite
 * @example floorLog2(5.1) // 2
 */
export function floorLog2(ratio: number): number {
  const value = ratio * (1 + SLACK)
  let n = 0
  while (n < 1000 && value >= powerOfTwo(n + 1)) n += 1
  while (n > -1000 && value < powerOfTwo(n)) n -= 1
  return n
}

/**
 * log2 of a ratio over 0, for axes and margins in bits.
 * @example log2(8) // 3
 */
export function log2(ratio: number): number {
  const whole = floorLog2(ratio)
  return whole + ln(ratio / powerOfTwo(whole)) / Math.LN2
}

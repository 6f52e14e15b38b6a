import { ln } from './elementary.ts'
import { gammaFront, gammaLower, gammaUpper } from './gamma.ts'
import { normalUpper } from './normal.ts'
import { remember } from './remember.ts'

/**
 * The value that χ² with `dof` degrees of freedom exceeds with probability `tail`.
 * @param tail upper tail, 0 < tail < 1
 * @param dof degrees of freedom, real, > 0, finite
 * @returns χ², relative error about 1e-13
 * Source: NIST DLMF 8.2 (χ² is twice a gamma variable of shape dof/2); start by Wilson and Hilferty (1931).
 * @example chiSquaredUpper(0.5, 2) // 2 * Math.LN2
 */
export const chiSquaredUpper: (tail: number, dof: number) => number = remember((tail, dof) => {
  const a = dof / 2
  const v = 2 / (9 * dof)
  const w = 1 - v + normalUpper(tail) * Math.sqrt(v)
  let x = w > 0.1 ? 0.5 * dof * w * w * w : a * 0.1
  const upper = tail <= 0.5
  const wanted = upper ? tail : 1 - tail
  for (let i = 0; i < 200; i++) {
    // Newton on ln(probability) against ln x: nearly straight in either tail. x·density = front.
    const p = upper ? gammaUpper(a, x) : gammaLower(a, x)
    const step = (ln(p / wanted) * p) / gammaFront(a, x)
    const factor = upper ? step : -step
    x *= factor > 1 ? 2 : factor < -0.5 ? 0.5 : 1 + factor
    if (step < 1e-14 && step > -1e-14) break
  }
  return 2 * x
})

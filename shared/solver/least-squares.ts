import { SimpleLinearRegression } from 'ml-regression-simple-linear'

/** A least-squares line e = offset + gain·z with the sums that its uncertainty and its tests need. */
export type LeastSquares = {
  offset: number
  gain: number
  /** Weighted mean of z; S = Σw(z - z̄)²; W = Σw. */
  zMean: number
  s: number
  w: number
}

/**
 * The least-squares line through (z, e), on centred data so that nothing large cancels.
 * @param z abscissas, at least two different
 * @param e ordinates
 * @param u standard uncertainties of e (weights 1/u²), or null for equal weights
 * @returns offset at z = 0 in the unit of e, gain in unit of e per unit of z
 * Source: solver.md section 3; JCGM 100:2008 H.3.2. The unweighted slope is ml-regression-simple-linear's.
 * Limits: relative error about 1e-12 for conditioned data (NIST StRD Norris: over 11 digits).
 * @example leastSquares([0, 1, 2], [1, 3, 5], null).gain // 2
 */
export function leastSquares(
  z: readonly number[],
  e: readonly number[],
  u: readonly number[] | null,
): LeastSquares {
  return u === null ? equalWeights(z, e) : weighted(z, e, u)
}

function equalWeights(z: readonly number[], e: readonly number[]): LeastSquares {
  const n = z.length
  let zMean = 0
  let eMean = 0
  for (let i = 0; i < n; i++) {
    zMean += z[i]!
    eMean += e[i]!
  }
  zMean /= n
  eMean /= n
  const dz = new Array<number>(n)
  const de = new Array<number>(n)
  let s = 0
  for (let i = 0; i < n; i++) {
    const d = z[i]! - zMean
    dz[i] = d
    de[i] = e[i]! - eMean
    s += d * d
  }
  const { slope, intercept } = new SimpleLinearRegression(dz, de)
  return { offset: eMean + intercept - slope * zMean, gain: slope, zMean, s, w: n }
}

function weighted(z: readonly number[], e: readonly number[], u: readonly number[]): LeastSquares {
  const n = z.length
  let w = 0
  let wz = 0
  let we = 0
  for (let i = 0; i < n; i++) {
    const weight = 1 / (u[i]! * u[i]!)
    w += weight
    wz += weight * z[i]!
    we += weight * e[i]!
  }
  const zMean = wz / w
  const eMean = we / w
  let s = 0
  let cross = 0
  for (let i = 0; i < n; i++) {
    const weight = 1 / (u[i]! * u[i]!)
    const d = z[i]! - zMean
    s += weight * d * d
    cross += weight * d * (e[i]! - eMean)
  }
  const gain = cross / s
  return { offset: eMean - gain * zMean, gain, zMean, s, w }
}

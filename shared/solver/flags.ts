import type { ConverterRange } from './converter.ts'
import { chiSquaredUpper } from './distribution/chi-squared.ts'
import { fisherUpper } from './distribution/fisher.ts'
import { studentUpper } from './distribution/student.ts'
import type { LeastSquares } from './least-squares.ts'
import { residualsOf } from './line.ts'
import type { PointSet } from './points.ts'
import type { Flag } from './types.ts'
import { unsettledFlags } from './unsettled.ts'

/** Under a quarter of an LSB neither an outlier nor a bow is worth a word. */
const LEAST_LSB = 0.25

/**
 * What the points say against themselves. Judged on the least-squares line with the fit's weights, whatever the method:
 * studentised residuals and χ² belong to it. Flags, never silent repairs.
 * Source: solver.md section 3; externally studentised residuals as in R. D. Cook and S. Weisberg, Residuals and
 * Influence in Regression (1982), chapter 2.
 * @example flagsOf(set, leastSquares(set.z, set.e, set.u), range, 0.25) // []
 */
export function flagsOf(
  points: PointSet,
  ls: LeastSquares,
  range: ConverterRange,
  settleLimitLsb: number,
): Flag[] {
  const flags: Flag[] = []
  const r = residualsOf(ls, points.z, points.e)
  if (points.n >= 4) outliers(points, ls, r, range.lsbV, flags)
  if (points.distinct >= 4) bow(points, ls, r, range, flags)
  unsettledFlags(points, range.lsbV, settleLimitLsb, flags)
  narrow(points, range, flags)
  if (points.n >= 3 && points.u !== null) inconsistent(points, points.u, r, range, flags)
  return flags
}

function weightAt(points: PointSet, i: number): number {
  if (points.u === null) return 1
  const u = points.u[i]!
  return 1 / (u * u)
}

function outliers(
  points: PointSet,
  ls: LeastSquares,
  r: readonly number[],
  lsbV: number,
  flags: Flag[],
): void {
  const { n } = points
  const limit = studentUpper(0.001 / (2 * n), n - 3)
  let squares = 0
  for (let i = 0; i < n; i++) squares += weightAt(points, i) * r[i]! * r[i]!
  for (let i = 0; i < n; i++) {
    const w = weightAt(points, i)
    const d = points.z[i]! - ls.zMean
    const rest = 1 - w * (1 / ls.w + (d * d) / ls.s)
    if (rest < 1e-9) continue
    // What the point stands off the line of the others.
    const off = r[i]! / rest
    if (Math.abs(off) <= LEAST_LSB * lsbV) continue
    const own = w * r[i]! * off
    const s2 = (squares - own) / (n - 3)
    // s2 may come out a rounding under zero: that is zero, and t infinite.
    if (s2 <= 0 || own > limit * limit * s2) {
      flags.push({
        flag: 'outlier',
        code: points.codes[i]!,
        value: off / lsbV,
        limit: LEAST_LSB,
        unit: 'LSB',
      })
    }
  }
}

/** The quadratic coefficient by the part of z² that offset and gain cannot make: orthogonal, so the line stays. */
function bow(points: PointSet, ls: LeastSquares, r: readonly number[], range: ConverterRange, flags: Flag[]) {
  const { n } = points
  const p = new Array<number>(n)
  let mean = 0
  let cubes = 0
  for (let i = 0; i < n; i++) {
    const d = points.z[i]! - ls.zMean
    const w = weightAt(points, i)
    mean += w * d * d
    cubes += w * d * d * d
  }
  mean /= ls.w
  let pp = 0
  let pr = 0
  for (let i = 0; i < n; i++) {
    const d = points.z[i]! - ls.zMean
    const w = weightAt(points, i)
    p[i] = d * d - mean - (cubes / ls.s) * d
    pp += w * p[i]! * p[i]!
    pr += w * p[i]! * r[i]!
  }
  const c = pr / pp
  const span = range.fullScaleV - range.lowV
  const bowLsb = ((-c * span * span) / 4 / range.lsbV) as number
  if (Math.abs(bowLsb) <= LEAST_LSB) return
  let squares = 0
  for (let i = 0; i < n; i++) {
    const rest = r[i]! - c * p[i]!
    squares += weightAt(points, i) * rest * rest
  }
  const t = studentUpper(0.005, n - 3)
  if (c * c * pp > (t * t * squares) / (n - 3)) {
    flags.push({ flag: 'bow', code: null, value: bowLsb, limit: LEAST_LSB, unit: 'LSB' })
  }
}

/** Points over less than 0.8 of the codes: the line is extrapolated. */
function narrow(points: PointSet, range: ConverterRange, flags: Flag[]): void {
  const span = points.codes[points.n - 1]! - points.codes[0]!
  if (span < 0.8 * (range.count - 1)) {
    flags.push({
      flag: 'narrow',
      code: null,
      value: span / (range.count - 1),
      limit: 0.8,
      unit: 'of full scale',
    })
  }
}

/** Residuals larger than the uncertainties and the part's linearity explain. */
function inconsistent(
  points: PointSet,
  u: readonly number[],
  r: readonly number[],
  range: ConverterRange,
  flags: Flag[],
): void {
  const ul = (range.inlLsb * range.lsbV) / Math.sqrt(3)
  let sum = 0
  for (let i = 0; i < points.n; i++) sum += (r[i]! * r[i]!) / (u[i]! * u[i]! + ul * ul)
  const free = points.n - 2
  const known = points.uDof === Number.POSITIVE_INFINITY
  const limit = known ? chiSquaredUpper(0.001, free) : free * fisherUpper(0.001, free, points.uDof)
  if (sum > limit) flags.push({ flag: 'inconsistent', code: null, value: sum, limit, unit: 'chi-squared' })
}

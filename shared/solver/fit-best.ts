import { type LeastSquares, leastSquares } from './least-squares.ts'
import { type Line, type PlannedNoise, plannedUncertainty, residualsOf } from './line.ts'
import type { PointSet } from './points.ts'

/**
 * The independently based (best-fit) line with its uncertainty. Weights 1/u² when every point has a u, else equal.
 * @param points sorted points, volts
 * @param noise stands in for u where the points tell nothing (two points, or residuals exactly zero)
 * @param ls the least-squares line of these points, when it is at hand
 * @returns offset in V, gain as a ratio, variances with the external-consistency rule, degrees of freedom
 * Source: solver.md section 3; JCGM 100:2008 H.3; line names of IEEE Std 1658.
 * @example fitBest(set, { noiseV: null, readings: 1 }).dof // 3
 */
export function fitBest(points: PointSet, noise: PlannedNoise, ls?: LeastSquares): Line {
  const line = ls ?? leastSquares(points.z, points.e, points.u)
  return points.u === null ? fromScatter(points, line, noise) : fromUncertainty(points, line, points.u)
}

function variances(ls: LeastSquares, factor: number): Line['variance'] {
  const { zMean, s, w } = ls
  return {
    offset: (1 / w + (zMean * zMean) / s) * factor,
    gain: (1 / s) * factor,
    cov: (-zMean / s) * factor,
  }
}

function fromUncertainty(points: PointSet, ls: LeastSquares, u: readonly number[]): Line {
  const r = residualsOf(ls, points.z, points.e)
  let chiSquared = 0
  for (let i = 0; i < points.n; i++) chiSquared += (r[i]! / u[i]!) * (r[i]! / u[i]!)
  const free = points.n - 2
  const scaled = free > 0 && chiSquared > free
  const dof = scaled ? free : points.uDof
  return {
    offset: ls.offset,
    gain: ls.gain,
    variance: variances(ls, scaled ? chiSquared / free : 1),
    dof,
    dofWhy: dof === Number.POSITIVE_INFINITY ? 'known-u' : null,
    chiSquared,
    note: null,
  }
}

function fromScatter(points: PointSet, ls: LeastSquares, noise: PlannedNoise): Line {
  const free = points.n - 2
  let squares = 0
  if (free > 0) {
    for (let i = 0; i < points.n; i++) {
      const r = points.e[i]! - ls.offset - ls.gain * points.z[i]!
      squares += r * r
    }
  }
  const line: Line = {
    offset: ls.offset,
    gain: ls.gain,
    variance: null,
    dof: free,
    dofWhy: free > 0 ? null : 'two-points',
    chiSquared: null,
    note: null,
  }
  if (squares > 0) {
    line.variance = variances(ls, squares / free)
    return line
  }
  const u = plannedUncertainty(noise, points.readings)
  if (u === null) return line
  // The line stays that of equal weights: the plan's u only says how well it is known.
  line.variance = spread(points, ls, u)
  line.dof = Number.POSITIVE_INFINITY
  line.dofWhy = free > 0 ? 'known-u' : 'two-points'
  line.note = 'planned-noise'
  return line
}

/** Variances of the equally weighted line when the points have the uncertainties u: each enters by its lever. */
function spread(points: PointSet, ls: LeastSquares, u: readonly number[]): Line['variance'] {
  let offset = 0
  let gain = 0
  let cov = 0
  for (let i = 0; i < points.n; i++) {
    const g = (points.z[i]! - ls.zMean) / ls.s
    const o = 1 / ls.w - ls.zMean * g
    const u2 = u[i]! * u[i]!
    offset += o * o * u2
    gain += g * g * u2
    cov += o * g * u2
  }
  return { offset, gain, cov }
}

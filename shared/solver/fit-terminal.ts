import { type Line, type PlannedNoise, plannedUncertainty } from './line.ts'
import type { PointSet } from './points.ts'

/**
 * The terminal-based (end-point) line: through the means at the lowest and the highest code.
 * @returns offset in V, gain as a ratio; variances from the u's of those two means (u² = Σu²/m²), no χ²
 * Source: solver.md section 3; line names of IEEE Std 1658.
 * @example fitTerminal(set, { noiseV: null, readings: 1 }).offset // set.e[0]
 */
export function fitTerminal(points: PointSet, noise: PlannedNoise): Line {
  const u = points.u ?? plannedUncertainty(noise, points.readings)
  const last = points.n - 1
  const low = endMean(points, u, 0, points.codes[0]!)
  const high = endMean(points, u, last, points.codes[last]!)
  const zl = points.z[0]!
  const zh = points.z[last]!
  const span = zh - zl
  const gain = (high.e - low.e) / span
  // From the end nearer to z = 0, so that the offset is not the difference of two larger numbers.
  const offset = Math.abs(zl) <= Math.abs(zh) ? low.e - gain * zl : high.e - gain * zh
  const planned = points.u === null
  const line: Line = {
    offset,
    gain,
    variance: null,
    dof: 0,
    dofWhy: 'terminal',
    chiSquared: null,
    note: planned && u !== null ? 'planned-noise' : null,
  }
  if (u === null) return line
  const s2 = span * span
  line.variance = {
    offset: (zh * zh * low.u2 + zl * zl * high.u2) / s2,
    gain: (low.u2 + high.u2) / s2,
    cov: -(zh * low.u2 + zl * high.u2) / s2,
  }
  line.dof = planned ? Number.POSITIVE_INFINITY : points.uDof
  if (!planned) line.dofWhy = line.dof === Number.POSITIVE_INFINITY ? 'known-u' : null
  return line
}

/** Mean error at one code and the variance of that mean; replicates stand next to each other. */
function endMean(points: PointSet, u: readonly number[] | null, from: number, code: number) {
  const step = from === 0 ? 1 : -1
  let e = 0
  let u2 = 0
  let m = 0
  for (let i = from; i >= 0 && i < points.n && points.codes[i] === code; i += step) {
    e += points.e[i]!
    u2 += u === null ? 0 : u[i]! * u[i]!
    m += 1
  }
  return { e: e / m, u2: u2 / (m * m) }
}

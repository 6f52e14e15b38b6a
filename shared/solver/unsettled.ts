import { studentUpper } from './distribution/student.ts'
import type { PointSet } from './points.ts'
import type { Flag } from './types.ts'

/**
 * Readings that still move: a point with four or more readings, taken as evenly spaced, whose straight line changes by
 * more than the limit and significantly (0.1 %, two-sided). A warming or auto-zero correcting amplifier shows this.
 * Source: solver.md section 3; slope test of a straight line, NIST/SEMATECH e-Handbook of Statistical Methods.
 */
export function unsettledFlags(points: PointSet, lsbV: number, limitLsb: number, flags: Flag[]): void {
  for (let i = 0; i < points.n; i++) {
    const list = points.readings[i]
    if (!list || list.length < 4) continue
    const change = drift(list)
    if (Math.abs(change) > limitLsb * lsbV) {
      flags.push({
        flag: 'unsettled',
        code: points.codes[i]!,
        value: change / lsbV,
        limit: limitLsb,
        unit: 'LSB',
      })
    }
  }
}

/**
 * The change slope·(m - 1) of the straight line through evenly spaced readings, or 0 when it is not significant.
 * @param list at least four readings, volts
 * @example drift([0, 1, 2, 3]) // 3
 */
export function drift(list: readonly number[]): number {
  const m = list.length
  const middle = (m - 1) / 2
  const first = list[0]!
  let mean = 0
  for (const value of list) mean += value - first
  mean /= m
  let sxx = 0
  let sxy = 0
  for (let k = 0; k < m; k++) {
    sxx += (k - middle) * (k - middle)
    sxy += (k - middle) * (list[k]! - first - mean)
  }
  const slope = sxy / sxx
  let squares = 0
  for (let k = 0; k < m; k++) {
    const rest = list[k]! - first - mean - slope * (k - middle)
    squares += rest * rest
  }
  const t = studentUpper(0.0005, m - 2)
  const significant = slope * slope * sxx > (t * t * squares) / (m - 2)
  return significant ? slope * (m - 1) : 0
}

import { studentUpper } from '../distribution/student.ts'
import type { Spread } from './spread.ts'

/** A difference with its uncertainty: `expanded` is k times the standard uncertainty, for 95 %. */
export type Difference = { value: number; standard: number; expanded: number; k: number; dof: number }

/**
 * Mean of one station less that of another, the spread from unit to unit included.
 * @param a, b what two stations read of comparable units, one unit of measure
 * @returns null where a spread does not exist, or both are zero
 * Source: NIST/SEMATECH e-Handbook of Statistical Methods, 7.3.1 (two means, unequal variances: Welch-Satterthwaite).
 * @example stationDifference({ n: 2, mean: 3, s: 1 }, { n: 2, mean: 1, s: 1 })?.value // 2
 */
export function stationDifference(a: Spread, b: Spread): Difference | null {
  if (a.s === null || b.s === null) return null
  const va = (a.s * a.s) / a.n
  const vb = (b.s * b.s) / b.n
  const variance = va + vb
  if (!(variance > 0)) return null
  const dof = (variance * variance) / ((va * va) / (a.n - 1) + (vb * vb) / (b.n - 1))
  const standard = Math.sqrt(variance)
  const k = studentUpper(0.025, dof)
  return { value: a.mean - b.mean, standard, expanded: k * standard, k, dof }
}

export type Drift = { perStep: number; standard: number; isClear: boolean }

/**
 * How a difference moves from step to step (months): the slope of the line with weights 1/u².
 * @param points `at` in steps, `value` and its standard uncertainty u > 0 in one unit
 * @returns the slope a step and its standard uncertainty; `isClear` when it is over twice that; null under three points or
 * where all stand at one step
 * Source: NIST/SEMATECH e-Handbook of Statistical Methods, 4.1.4.3 (weighted least squares), known weights.
 * @example driftOf([{ at: 0, value: 0, u: 1 }, { at: 1, value: 2, u: 1 }, { at: 2, value: 4, u: 1 }])?.perStep // 2
 */
export function driftOf(points: readonly { at: number; value: number; u: number }[]): Drift | null {
  const usable = points.filter(({ u }) => u > 0)
  if (usable.length < 3) return null
  let weight = 0
  let at = 0
  let value = 0
  for (const point of usable) {
    const w = 1 / (point.u * point.u)
    weight += w
    at += w * point.at
    value += w * point.value
  }
  at /= weight
  value /= weight
  let squares = 0
  let products = 0
  for (const point of usable) {
    const w = 1 / (point.u * point.u)
    squares += w * (point.at - at) * (point.at - at)
    products += w * (point.at - at) * (point.value - value)
  }
  if (!(squares > 0)) return null
  const perStep = products / squares
  const standard = 1 / Math.sqrt(squares)
  return { perStep, standard, isClear: Math.abs(perStep) > 2 * standard }
}

import { studentUpper } from './distribution/student.ts'
import type { Line } from './line.ts'
import type { InstrumentLimits } from './types.ts'

/** Standard uncertainties of an instrument's gain (ratio) and offset (V), common to all points of a measurement. */
export type InstrumentU = { gain: number; offset: number }

/**
 * Limits taken as rectangular: u = limit/√3.
 * Source: JCGM 100:2008 4.3.7.
 * @example instrumentU({ gainPpm: 3, offsetV: 0 }).offset // 0
 */
export function instrumentU(instrument: InstrumentLimits | null | undefined): InstrumentU {
  if (!instrument) return { gain: 0, offset: 0 }
  const root = Math.sqrt(3)
  return { gain: instrument.gainPpm / 1e6 / root, offset: instrument.offsetV / root }
}

/** A standard uncertainty with the share that the fit (or a point) has in it. */
export type Combined = { u: number; fit: number }

/** k·u with the k of Welch-Satterthwaite (JCGM 100:2008 G.4): only `fit` has finite degrees of freedom. */
export function expand(part: Combined, dof: number): { k: number; expanded: number } {
  const ratio = part.fit > 0 ? part.u / part.fit : Number.POSITIVE_INFINITY
  const square = ratio * ratio
  const k = studentUpper(0.025, dof * square * square)
  return { k, expanded: k * part.u }
}

/** u(O), u(G) and their covariance with the instrument in them (solver.md section 3). */
export function lineUncertainty(variance: NonNullable<Line['variance']>, instr: InstrumentU, x0: number) {
  const g2 = instr.gain * instr.gain
  const offset2 = variance.offset + instr.offset * instr.offset + x0 * x0 * g2
  return {
    offset: { u: Math.sqrt(offset2), fit: Math.sqrt(variance.offset) },
    gain: { u: Math.sqrt(variance.gain + g2), fit: Math.sqrt(variance.gain) },
    cov: variance.cov + x0 * g2,
  }
}

/** u of the error line at x (z = x - x0): fit part + (u_ig·x)² + u_io². */
export function errorUncertainty(
  variance: NonNullable<Line['variance']>,
  instr: InstrumentU,
  x: number,
  z: number,
): Combined {
  const fit2 = variance.offset + z * (2 * variance.cov + z * variance.gain)
  const safe = Math.max(fit2, 0)
  const common = instr.gain * x * (instr.gain * x) + instr.offset * instr.offset
  return { u: Math.sqrt(safe + common), fit: Math.sqrt(safe) }
}

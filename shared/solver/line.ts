import type { DofWhy } from './types.ts'

/** A fitted error line and what the fit alone knows of its uncertainty (no instrument part). Volts, ratios. */
export type Line = {
  offset: number
  gain: number
  /** Variances and covariance of offset and gain; null where the method gives none. */
  variance: { offset: number; gain: number; cov: number } | null
  /** Degrees of freedom of the variances, Infinity when u is known; 0 when there are none. */
  dof: number
  dofWhy: DofWhy | null
  chiSquared: number | null
  /** `planned-noise` and the like. */
  note: string | null
}

/** Residuals r = e - O - G·z. */
export function residualsOf(
  line: { offset: number; gain: number },
  z: readonly number[],
  e: readonly number[],
) {
  const r = new Array<number>(z.length)
  for (let i = 0; i < z.length; i++) r[i] = e[i]! - line.offset - line.gain * z[i]!
  return r
}

/** Noise of the plan: standard deviation of a reading in volts, and readings to a point where a point does not say. */
export type PlannedNoise = { noiseV: number | null; readings: number }

/** noiseV/√m for each point: m is the point's own number of readings, else the plan's. Null without noiseV. */
export function plannedUncertainty(
  noise: PlannedNoise,
  readings: readonly (readonly number[] | null)[],
): number[] | null {
  const { noiseV } = noise
  if (noiseV === null) return null
  return readings.map((list) => noiseV / Math.sqrt(list?.length ?? noise.readings))
}

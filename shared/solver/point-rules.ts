import type { Design } from './types.ts'

/** What the plan of measurement says about points. */
export type PointRules = { plausiblePercent: number; resolutionV: number; minCodes: number }

export function pointRules(measurement: Design['measurement'], minCodes = 2): PointRules {
  return {
    plausiblePercent: measurement.plausiblePercent ?? 5,
    resolutionV: measurement.resolutionV ?? 0,
    minCodes,
  }
}

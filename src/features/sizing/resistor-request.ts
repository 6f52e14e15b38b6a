import { isOgeeError } from '../../../shared/errors.ts'
import type { NetworkResult } from '../../../shared/solver/network-synthesis/request.ts'
import type { Series } from '../../../shared/solver/network-synthesis/series.ts'
import { synthesiseNetwork } from '../../../shared/solver/network-synthesis/synthesise.ts'
import type { SizeResult } from '../../../shared/solver/sizing/types.ts'
import type { Adjuster, PerAdjuster, Which } from '../../../shared/solver/types.ts'

/** What the person asks of the resistors. Ratio, ohms, amperes; null is no limit. */
export type ResistorSettings = {
  series: Series
  tolerance: number
  maxSourceOhm: number | null
  maxCurrentA: number | null
}

export const usualSettings: ResistorSettings = {
  series: 'E96',
  tolerance: 0.001,
  maxSourceOhm: 2000,
  maxCurrentA: 500e-6,
}

export type ResistorAnswer = { result: NetworkResult } | { refusal: string }

/** Values for the reach that the sizing asks of the node, or why none can be looked for; null without the adjuster. */
export function findResistors(
  design: { adjusters: PerAdjuster<Adjuster> },
  size: SizeResult,
  which: Which,
  { series, tolerance, maxSourceOhm, maxCurrentA }: ResistorSettings,
): ResistorAnswer | null {
  const needed = size.adjusters[which]
  if (needed === undefined) return null
  try {
    const result = synthesiseNetwork(design, which, {
      wantedLowV: needed.requiredLowV,
      wantedHighV: needed.requiredHighV,
      series,
      tolerance,
      maxSourceOhm: maxSourceOhm ?? undefined,
      maxCurrentA: maxCurrentA ?? undefined,
      count: 4,
    })
    return { result }
  } catch (error) {
    if (isOgeeError(error)) return { refusal: error.message }
    throw error
  }
}

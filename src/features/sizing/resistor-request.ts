import type { Series } from '../../../shared/solver/network-synthesis/series.ts'
import type { SizeResult } from '../../../shared/solver/sizing/types.ts'
import type { Adjuster, PerAdjuster, Which } from '../../../shared/solver/types.ts'
import { findNetwork } from '../../lib/find-network.ts'
import type { FromNetworkWorker, ToNetworkWorker } from '../../lib/network-messages.ts'

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

export type ResistorAnswer = FromNetworkWorker

type Adjusted = { adjusters: PerAdjuster<Adjuster> }

/** The question for the reach that the sizing asks of the node; null without the adjuster. */
export function resistorQuestion(
  { adjusters }: Adjusted,
  size: SizeResult,
  which: Which,
  { series, tolerance, maxSourceOhm, maxCurrentA }: ResistorSettings,
): ToNetworkWorker | null {
  const needed = size.adjusters[which]
  if (needed === undefined) return null
  const request = {
    wantedLowV: needed.requiredLowV,
    wantedHighV: needed.requiredHighV,
    series,
    tolerance,
    maxSourceOhm: maxSourceOhm ?? undefined,
    maxCurrentA: maxCurrentA ?? undefined,
    count: 4,
  }
  return { design: { adjusters }, which, request }
}

/** Asked and answered at once, in the page. */
export function findResistors(
  design: Adjusted,
  size: SizeResult,
  which: Which,
  settings: ResistorSettings,
): ResistorAnswer | null {
  const question = resistorQuestion(design, size, which, settings)
  return question === null ? null : findNetwork(question)
}

import { appliedVoltages } from '../applied.ts'
import { fitChannel } from '../fit.ts'
import { prepareTrim } from '../prepare-trim.ts'
import type { Applied, Design, MeasuredPoint } from '../types.ts'
import type { UnitError } from './types.ts'

/**
 * The errors of a measured unit as it would be with nothing loaded: its fitted line less what the applied codes did.
 * @param options range; codes loaded while measuring, neutral when left out
 * @throws as `computeCodes`
 * Source: solver.md sections 3 and 5.
 * @example unitError(unipolar18, [{ code: 0, measured: 1e-6 }, { code: 262143, measured: 10 - 10/2**18 + 1e-6 }]).offsetErrorV // 1e-6
 */
export function unitError(
  design: Design,
  points: readonly MeasuredPoint[],
  options: { rangeId?: string | undefined; applied?: Applied | undefined } = {},
): UnitError {
  const { channel, trimmers } = prepareTrim(design, options.rangeId)
  const { line } = fitChannel(channel, points)
  const nowV = appliedVoltages(trimmers, options.applied ?? 'neutral')
  let { offset, gain } = line
  for (const which of ['gain', 'offset'] as const) {
    const trimmer = trimmers[which]
    if (trimmer === null) continue
    const moved = nowV[which] - trimmer.nominalV
    offset -= trimmer.alpha * moved
    gain -= trimmer.beta * moved
  }
  return { offsetErrorV: offset, gainErrorPpm: gain * 1e6 }
}

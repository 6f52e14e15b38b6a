import { OgeeError } from '../errors.ts'
import type { Trimmer, Trimmers } from './adjuster.ts'
import { nodeV } from './network.ts'
import type { Applied, PerAdjuster, Which } from './types.ts'

/** Node voltages while the points were measured; `assumed` when it was not said for an adjuster. */
export type AppliedV = { gain: number; offset: number; assumed: boolean }

/**
 * The voltages that applied codes make. Nothing said gives neutral, which stands for nominal to within half a step; a code
 * that is given counts exactly, because taking it for nominal would put up to half a step of error into the next pass.
 * @param applied `neutral`, a pair of codes, or nothing
 * @returns volts at each node (0 for an absent adjuster)
 * @throws applied-unknown: a code that the DAC does not have, or an adjuster that the design does not have
 * Source: solver.md section 5.
 * @example appliedVoltages(trimmers, 'neutral') // { gain: 0, offset: 0, assumed: false }
 */
export function appliedVoltages(trimmers: Trimmers, applied: Applied | undefined): AppliedV {
  const pair: PerAdjuster<number> = applied === undefined || applied === 'neutral' ? {} : applied
  const result: AppliedV = { gain: 0, offset: 0, assumed: false }
  for (const which of ['gain', 'offset'] as const) {
    const trimmer = trimmers[which]
    const code = pair[which]
    if (trimmer === null) {
      if (code !== undefined) unknown(which, `The design has no ${which} adjuster; leave its code out.`)
      continue
    }
    if (code === undefined && applied !== 'neutral') result.assumed = true
    result[which] = code === undefined ? trimmer.nominalV : voltage(trimmer, code)
  }
  return result
}

function voltage(trimmer: Trimmer, code: number): number {
  if (!Number.isInteger(code) || code < 0 || code >= trimmer.count) {
    const top = trimmer.count - 1
    unknown(trimmer.which, `Applied ${trimmer.which} code ${code} does not exist: the highest is ${top}.`)
  }
  return nodeV(trimmer, code)
}

function unknown(which: Which, message: string): never {
  throw new OgeeError('applied-unknown', message, { errors: [{ path: `/applied/${which}`, message }] })
}

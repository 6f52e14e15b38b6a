import type { Trimmer, Trimmers } from './adjuster.ts'
import type { Channel } from './channel.ts'
import { errorUncertainty, expand, type InstrumentU } from './instrument.ts'
import type { Line } from './line.ts'
import type { Predicted } from './types.ts'

/** Node voltages to move to and from; 0 for an absent adjuster. */
export type Move = { gain: number; offset: number }

/** The line after a move: offset and slope, and its errors at the low end and at full scale. */
export type Moved = { offset: number; gain: number; errorLow: number; errorFull: number }

/**
 * The error line after the node voltages change by `dv`. Ends are computed as ends, not from the moved line, so that
 * an end which an adjuster cannot move stays exact.
 * Source: solver.md section 5.
 */
export function moveLine(
  channel: Channel,
  trimmers: Trimmers,
  line: { offset: number; gain: number },
  dv: Move,
): Moved {
  const { range } = channel
  const { gain, offset } = trimmers
  let errorLow = line.offset + line.gain * range.zLow
  let errorFull = line.offset + line.gain * range.zFull
  let o = line.offset
  let g = line.gain
  if (offset !== null) {
    errorLow += offset.endLow * dv.offset
    errorFull += offset.endFull * dv.offset
    o += offset.alpha * dv.offset
    g += offset.beta * dv.offset
  }
  if (gain !== null) {
    errorLow += gain.endLow * dv.gain
    errorFull += gain.endFull * dv.gain
    o += gain.alpha * dv.gain
    g += gain.beta * dv.gain
  }
  return { offset: o, gain: g, errorLow, errorFull }
}

/** The larger end of a line, V. */
export function worstEnd(moved: Moved): number {
  const low = Math.abs(moved.errorLow)
  const full = Math.abs(moved.errorFull)
  return Math.max(low, full)
}

/**
 * The predicted line with its worst value over the range, which stands at an end, and its expanded uncertainty there.
 * @param dv change of the node voltages, V
 * Source: solver.md section 5: u² = u²(e at x) + Σ(τ_i·|ΔV_i|·|α_i + β_i·z|)²/3, the added terms with infinite dof.
 */
export function predict(
  channel: Channel,
  trimmers: Trimmers,
  line: Line,
  instr: InstrumentU,
  dv: Move,
): Predicted {
  const { range } = channel
  const moved = moveLine(channel, trimmers, line, dv)
  const atLow = Math.abs(moved.errorLow) >= Math.abs(moved.errorFull)
  const worstV = worstEnd(moved)
  const low = effectTerms(trimmers, dv, true)
  const full = effectTerms(trimmers, dv, false)
  let expandedUncertaintyV: number | null = null
  if (line.variance !== null) {
    const x = atLow ? range.lowV : range.fullScaleV
    const z = atLow ? range.zLow : range.zFull
    const part = errorUncertainty(line.variance, instr, x, z)
    const u = Math.sqrt(part.u * part.u + (atLow ? low : full).squares / 3)
    expandedUncertaintyV = expand({ u, fit: part.fit }, line.dof).expanded
  }
  return {
    offsetErrorV: moved.offset,
    gainErrorPpm: moved.gain * 1e6,
    worstV,
    worstLsb: worstV / range.lsbV,
    worstPpm: (worstV / range.fsrV) * 1e6,
    atV: atLow ? range.lowV : range.fullScaleV,
    expandedUncertaintyV,
    effectV: Math.max(low.sum, full.sum),
  }
}

/** Σ and Σ² of τ·|ΔV|·|effect| at one end. */
function effectTerms(trimmers: Trimmers, dv: Move, atLow: boolean): { sum: number; squares: number } {
  const offset = effectTerm(trimmers.offset, dv.offset, atLow)
  const gain = effectTerm(trimmers.gain, dv.gain, atLow)
  return { sum: offset + gain, squares: offset * offset + gain * gain }
}

function effectTerm(trimmer: Trimmer | null, move: number, atLow: boolean): number {
  if (trimmer === null) return 0
  return trimmer.tolerance * Math.abs(move) * Math.abs(atLow ? trimmer.endLow : trimmer.endFull)
}

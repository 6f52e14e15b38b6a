import { prepareTrimmer } from './adjuster.ts'
import { type Channel, prepareChannel } from './channel.ts'
import { type FitOptions, fitChannel } from './fit.ts'
import { moveLine, worstEnd } from './predict.ts'
import type { MeasuredPoint, SharedLine, TrimResult } from './types.ts'

/**
 * The lines of ranges that share this one's hardware without reloading: the codes come from this range, and what they
 * do to each of the others is reported; the predicted line itself only where that range was measured.
 * Source: solver.md section 5, `sharedWith`.
 */
export function sharedLines(
  channel: Channel,
  trim: TrimResult,
  points: Readonly<Record<string, readonly MeasuredPoint[]>>,
  options: FitOptions,
): SharedLine[] {
  if (trim.nodeV === null) return []
  const move = {
    gain: (trim.nodeV.gain ?? 0) - (trim.appliedNodeV.gain ?? 0),
    offset: (trim.nodeV.offset ?? 0) - (trim.appliedNodeV.offset ?? 0),
  }
  return channel.sharedWith.map((id) => {
    const other = prepareChannel(channel.design, id)
    const trimmers = { gain: prepareTrimmer(other, 'gain'), offset: prepareTrimmer(other, 'offset') }
    const change = moveLine(other, trimmers, { offset: 0, gain: 0 }, move)
    const measured = points[id]
    const result: SharedLine = {
      range: id,
      change: { offsetErrorV: change.offset, gainErrorPpm: change.gain * 1e6 },
      predicted: null,
    }
    if (measured !== undefined) {
      const moved = moveLine(other, trimmers, fitChannel(other, measured, options).line, move)
      const atLow = Math.abs(moved.errorLow) >= Math.abs(moved.errorFull)
      result.predicted = {
        offsetErrorV: moved.offset,
        gainErrorPpm: moved.gain * 1e6,
        worstV: worstEnd(moved),
        atV: atLow ? other.range.lowV : other.range.fullScaleV,
      }
    }
    return result
  })
}

import type { Trimmers } from '../adjuster.ts'
import type { ConverterRange } from '../converter.ts'
import { exactMoves } from '../solve-exact.ts'
import type { Which } from '../types.ts'

/** The row of M⁻¹ that turns an error line into a move: ΔV = -(o·O + g·G). V per V, V per unit of slope. */
export type Row = { o: number; g: number }

/**
 * How far each node moves for a volt of offset and for a unit of slope; alone, the row that nulls where it can. Read off
 * the solver's own exact moves, so that sizing and trimming can never part.
 * @throws adjusters-not-independent, adjuster-without-effect
 * Source: solver.md sections 5 and 6.
 * @example nullingRow(trimmers, range, 'gain').g // 1/0.00208
 */
export function nullingRow(trimmers: Trimmers, range: ConverterRange, which: Which): Row {
  const { gain, offset } = trimmers
  return {
    o: -(exactMoves(gain, offset, range, 1, 0)[which] ?? 0),
    g: -(exactMoves(gain, offset, range, 0, 1)[which] ?? 0),
  }
}

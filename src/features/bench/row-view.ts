import type { Outcome } from '../../../shared/contract/primitives.ts'
import type { InputColumn } from './grid-state.ts'

/** What the grid shows beside the typed text of a row; null is "not yet". */
export type RowView = {
  /** The code as a number, for names of cells; null while it cannot be read. */
  code: number | null
  ideal: string | null
  error: string | null
  residual: string | null
  errorLsb: string | null
  expanded: string | null
  decision: Outcome | null
  isFlagged: boolean
  /** Mean and count of several readings, or what arithmetic came to: shown in place of the typed text. */
  measuredAs: string | null
  /** The same as doubles, for copying: volts and LSB. */
  numbers: {
    ideal: number | null
    error: number | null
    residual: number | null
    errorLsb: number | null
    expanded: number | null
  }
  /** Sentences, by the cell they belong to. */
  problems: Partial<Record<InputColumn, string>>
}

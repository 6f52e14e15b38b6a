import { oneSpelling } from '../../../shared/quantity/units.ts'
import { verdictWord } from '../../ui/verdict.tsx'
import { type Column, type GridState, isInput, type Row, selected } from './grid-state.ts'
import type { RowView } from './row-view.ts'

/** What is selected as tab-separated ASCII that pastes back to the same doubles; computed cells as plain volts or LSB. */
export function copiedText(state: GridState, views: readonly RowView[]): string {
  const area = selected(state)
  const lines: string[] = []
  for (let row = area.top; row <= area.bottom; row++) {
    lines.push(area.columns.map((column) => cellText(state.rows[row], views[row], column)).join('\t'))
  }
  return lines.join('\r\n')
}

function cellText(row: Row | undefined, view: RowView | undefined, column: Column): string {
  if (isInput(column)) return oneSpelling(row?.[column] ?? '').replaceAll(/[\t\r\n]+/g, ' ')
  if (column === 'decision') return view?.decision ? verdictWord(view.decision) : ''
  const value = view?.numbers[column]
  return value === null || value === undefined ? '' : String(value)
}

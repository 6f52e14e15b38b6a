import { type BlockCell, type GridColumn, parseBlock } from '../../../shared/points/parse-block.ts'
import type { GridAction } from './grid-reducer.ts'
import {
  emptyRow,
  type GridState,
  type InputColumn,
  isInput,
  type RefusedCell,
  type Row,
  withCell,
} from './grid-state.ts'
import { readCode } from './read-cells.ts'

const gridColumns: Readonly<Record<InputColumn, GridColumn>> = {
  code: 'code',
  measured: 'measured',
  u: 'uncertainty',
}

/**
 * A pasted block as one step of the grid, from the focused cell to the right and down; rows are added as needed. A cell
 * that cannot be read leaves what was there and is named.
 */
export function pasteAction(state: GridState, text: string, decimalComma = false): GridAction | null {
  const columns = columnsFrom(state, text)
  const asked = columns.inputs.map((column) => columnFor(column, text))
  const block = parseBlock(text, asked, { decimalComma })
  if (block.filled === 0) return null
  let rows: readonly Row[] = state.rows
  const refused: RefusedCell[] = []
  block.rows.forEach((cells, down) => {
    const row = state.focus.row + down
    if (rows.length <= row) rows = [...rows, emptyRow()]
    cells.forEach((cell, right) => {
      const column = columns.inputs[right]
      if (cell.text.trim() === '') return
      if (column === undefined || !isTaken(cell, column)) {
        refused.push(refusedCell(cell, row, column ?? 'measured'))
      } else rows = withCell(rows, row, column, textOf(cell, decimalComma))
    })
  })
  const taken = block.filled - refused.length
  const report =
    refused.length > 0 || columns.note ? { taken, total: block.filled, refused, lost: columns.note } : null
  return { do: 'rows', rows, report }
}

/** After [Yes, all]: the same cells again, in the same step, so that one undo still takes the paste back. */
export function decimalCommaAction(state: GridState): GridAction | null {
  const { report } = state
  if (!report) return null
  let rows = state.rows
  for (const cell of report.refused) {
    if (cell.isDecimalComma) rows = withCell(rows, cell.row, cell.column, cell.text.trim().replace(',', '.'))
  }
  const refused = report.refused.filter((cell) => !cell.isDecimalComma)
  const taken = report.total - refused.length
  return {
    do: 'rows',
    rows,
    instead: true,
    report: refused.length > 0 ? { ...report, taken, refused } : null,
  }
}

/** A column of the grid that holds codes may also hold a wanted voltage; arithmetic is worked out in its cell. */
function isTaken(cell: BlockCell, column: InputColumn): boolean {
  if (cell.message === null || cell.arithmetic) return true
  return column === 'code' && readCode(cell.text, () => 'pending').is === 'value'
}

const textOf = (cell: BlockCell, decimalComma: boolean): string =>
  decimalComma ? cell.text.trim().replace(',', '.') : cell.text.trim()

const refusedCell = (cell: BlockCell, row: number, column: InputColumn): RefusedCell => ({
  row,
  column,
  text: cell.text.trim(),
  why: (cell.message ?? '').replace(`${cell.text.trim()}: `, ''),
  isDecimalComma: cell.comma,
})

const columnFor = (column: InputColumn, text: string): GridColumn =>
  column === 'measured' && text.includes(';') ? 'readings' : gridColumns[column]

type Columns = { inputs: readonly InputColumn[]; note: string | null }

/** From the focused column on. Codes beside readings, pasted on the readings, go where they belong, and that is said. */
function columnsFrom({ focus, hasU }: GridState, text: string): Columns {
  const all: readonly InputColumn[] = hasU ? ['code', 'measured', 'u'] : ['code', 'measured']
  const start = isInput(focus.column) ? focus.column : 'measured'
  const firsts = text
    .split(/\r?\n|\r/)
    .filter((line) => line.trim() !== '')
    .map((line) => line.split('\t'))
  const areCodes = firsts.every(
    (cells) => cells.length === 2 && /^\s*(0x[0-9a-f]+|\d+)\s*$/i.test(cells[0] ?? ''),
  )
  if (start === 'measured' && !hasU && areCodes) {
    return { inputs: all, note: 'The first column holds codes, so the block begins at the code column.' }
  }
  return { inputs: all.slice(all.indexOf(start)), note: null }
}

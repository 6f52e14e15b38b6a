/** The points grid as data: rows of typed text, where the focus is, what is being typed, and every earlier state. */

export const inputColumns = ['code', 'measured', 'u'] as const
export type InputColumn = (typeof inputColumns)[number]
export type Column =
  | 'code'
  | 'ideal'
  | 'measured'
  | 'u'
  | 'error'
  | 'residual'
  | 'errorLsb'
  | 'expanded'
  | 'decision'
/** As found: residuals from the line. As left: each point against the tolerance. */
export type GridKind = 'found' | 'left'

/** What a file said of a point beside its value; kept as long as the value is. */
export type RowExtra = { readAt?: string; temperatureC?: number }
/** Text exactly as typed: "1.10" stays "1.10". */
export type Row = Record<InputColumn, string> & { extra?: RowExtra }
export type Place = { row: number; column: Column }

/** `replace` began by typing over the cell (arrows leave it); `edit` by F2 (arrows move the caret). */
export type Editing = { text: string; mode: 'replace' | 'edit' }

export type RefusedCell = {
  row: number
  column: InputColumn
  text: string
  why: string
  isDecimalComma: boolean
}
export type PasteReport = {
  taken: number
  total: number
  refused: readonly RefusedCell[]
  lost: string | null
}

export type GridState = {
  kind: GridKind
  rows: readonly Row[]
  hasU: boolean
  focus: Place
  /** The corner opposite the focus of what is selected. */
  anchor: Place
  editing: Editing | null
  past: readonly (readonly Row[])[]
  future: readonly (readonly Row[])[]
  report: PasteReport | null
}

export const emptyRow = (code = ''): Row => ({ code, measured: '', u: '' })

export function newGrid(rows: readonly Row[], kind: GridKind = 'found', hasU = false): GridState {
  const focus: Place = { row: 0, column: 'measured' }
  return { kind, rows, hasU, focus, anchor: focus, editing: null, past: [], future: [], report: null }
}

export function columnsOf({ hasU, kind }: Pick<GridState, 'hasU' | 'kind'>): readonly Column[] {
  const inputs: Column[] = hasU ? ['code', 'ideal', 'measured', 'u'] : ['code', 'ideal', 'measured']
  return kind === 'found'
    ? [...inputs, 'error', 'residual']
    : [...inputs, 'error', 'errorLsb', 'expanded', 'decision']
}

export const isInput = (column: Column): column is InputColumn =>
  (inputColumns as readonly Column[]).includes(column)

/** What the cells hold at this moment, the one being typed in included. */
export function rowsNow(state: GridState): readonly Row[] {
  const { editing, focus, rows } = state
  if (!editing || !isInput(focus.column)) return rows
  return withCell(rows, focus.row, focus.column, editing.text)
}

export function withCell(
  rows: readonly Row[],
  row: number,
  column: InputColumn,
  text: string,
): readonly Row[] {
  if (rows[row]?.[column] === text) return rows
  return rows.map((one, index) => (index === row ? changedRow(one, column, text) : one))
}

/** Another reading was read at another time: what the file said of the old one goes with it. */
function changedRow({ extra, ...row }: Row, column: InputColumn, text: string): Row {
  const kept = extra !== undefined && column !== 'measured' ? { extra } : {}
  return { ...row, ...kept, [column]: text }
}

export type Area = { top: number; bottom: number; columns: readonly Column[] }

/** The selected rectangle. */
export function selected(state: GridState): Area {
  const { focus, anchor } = state
  const columns = columnsOf(state)
  const [a, b] = [columns.indexOf(focus.column), columns.indexOf(anchor.column)]
  return {
    top: Math.min(focus.row, anchor.row),
    bottom: Math.max(focus.row, anchor.row),
    columns: columns.slice(Math.min(a, b), Math.max(a, b) + 1),
  }
}

export const isSelected = (area: Area, row: number, column: Column): boolean =>
  row >= area.top && row <= area.bottom && area.columns.includes(column)

export const hasReadings = (rows: readonly Row[]): boolean => rows.some((row) => row.measured.trim() !== '')

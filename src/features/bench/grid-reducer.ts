import {
  type Column,
  columnsOf,
  type Editing,
  emptyRow,
  type GridState,
  type InputColumn,
  isInput,
  type PasteReport,
  type Place,
  type Row,
  rowsNow,
  selected,
  withCell,
} from './grid-state.ts'

export type Direction = 'up' | 'down' | 'left' | 'right' | 'next' | 'previous'

export type GridAction =
  | { do: 'focus'; place: Place; extend?: boolean }
  | { do: 'move'; to: Direction; extend?: boolean; far?: boolean }
  | { do: 'edit'; editing: Editing }
  | { do: 'type'; text: string }
  | { do: 'commit'; leave?: Direction }
  | { do: 'cancel' }
  | { do: 'clear' }
  | { do: 'select-all' }
  | { do: 'set-cell'; row: number; column: InputColumn; text: string }
  /** New rows in one step: a paste, a file, a row added or taken away. `instead` replaces the last step. */
  | { do: 'rows'; rows: readonly Row[]; report?: PasteReport | null; instead?: boolean; hasU?: boolean }
  | { do: 'add-row' }
  | { do: 'remove-rows' }
  | { do: 'show-u'; show: boolean }
  | { do: 'dismiss-report' }
  | { do: 'undo' }
  | { do: 'redo' }
  | { do: 'load'; state: GridState }

/** One step of the grid. Whatever changes rows keeps the rows before it, so that one undo brings them back. */
export function gridReducer(state: GridState, action: GridAction): GridState {
  switch (action.do) {
    case 'focus':
      return focused(committed(state), action.place, action.extend)
    case 'move':
      return focused(state, placeAfter(state, action.to, action.far), action.extend)
    case 'edit':
      return isInput(state.focus.column) ? { ...state, anchor: state.focus, editing: action.editing } : state
    case 'type':
      return state.editing ? { ...state, editing: { ...state.editing, text: action.text } } : state
    case 'commit': {
      const done = committed(state)
      return action.leave ? focused(done, placeAfter(done, action.leave)) : done
    }
    case 'cancel':
      return { ...state, editing: null }
    case 'clear':
      return changed(state, cleared(state))
    case 'select-all':
      return selectAll(state)
    case 'set-cell':
      return changed(state, withCell(state.rows, action.row, action.column, action.text))
    case 'rows':
      return withRows(state, action)
    case 'add-row':
      return addRow(committed(state))
    case 'remove-rows':
      return removeRows(committed(state))
    case 'show-u':
      return showU(committed(state), action.show)
    case 'dismiss-report':
      return { ...state, report: null }
    case 'undo':
      return undo(state)
    case 'redo':
      return redo(state)
    case 'load':
      return action.state
  }
}

function changed(state: GridState, rows: readonly Row[]): GridState {
  if (rows === state.rows) return state
  return { ...state, rows, past: [...state.past, state.rows], future: [], report: null }
}

function committed(state: GridState): GridState {
  if (!state.editing) return state
  return { ...changed(state, rowsNow(state)), editing: null }
}

function focused(state: GridState, place: Place, extend = false): GridState {
  const row = Math.max(0, Math.min(place.row, state.rows.length - 1))
  const focus = { row, column: place.column }
  return { ...state, focus, anchor: extend ? state.anchor : focus }
}

function placeAfter(state: GridState, to: Direction, far = false): Place {
  const columns = columnsOf(state)
  const { row, column } = state.focus
  const at = columns.indexOf(column)
  const last = state.rows.length - 1
  const sideways = (index: number): Column =>
    columns[Math.max(0, Math.min(index, columns.length - 1))] ?? column
  if (to === 'up') return { row: far ? 0 : row - 1, column }
  if (to === 'down') return { row: far ? last : row + 1, column }
  if (to === 'left') return { row, column: sideways(far ? 0 : at - 1) }
  if (to === 'right') return { row, column: sideways(far ? columns.length : at + 1) }
  return nextInput(state, to === 'next' ? 1 : -1) ?? state.focus
}

/** The next or previous cell that takes input, over the ends of rows; null past the ends of the grid. */
export function nextInput(state: GridState, step: 1 | -1): Place | null {
  const columns = columnsOf(state)
  const count = columns.length
  let at = state.focus.row * count + columns.indexOf(state.focus.column) + step
  while (at >= 0 && at < state.rows.length * count) {
    const column = columns[at % count]
    if (column && isInput(column)) return { row: Math.floor(at / count), column }
    at += step
  }
  return null
}

function cleared(state: GridState): readonly Row[] {
  const area = selected(state)
  const inputs = area.columns.filter(isInput)
  let rows = state.rows
  for (let row = area.top; row <= area.bottom; row++) {
    for (const column of inputs) rows = withCell(rows, row, column, '')
  }
  return rows
}

function selectAll(state: GridState): GridState {
  const columns = columnsOf(state)
  return {
    ...state,
    anchor: { row: 0, column: columns[0] ?? 'code' },
    focus: { row: state.rows.length - 1, column: columns.at(-1) ?? 'residual' },
  }
}

function withRows(state: GridState, action: Extract<GridAction, { do: 'rows' }>): GridState {
  const before = action.instead
    ? { ...state, rows: state.past.at(-1) ?? state.rows, past: state.past.slice(0, -1) }
    : state
  const next = changed({ ...before, editing: null }, action.rows)
  const hasU = action.hasU ?? (state.hasU || action.rows.some((row) => row.u !== ''))
  return focused({ ...next, hasU, report: action.report ?? null }, state.focus)
}

function addRow(state: GridState): GridState {
  const below = state.focus.row + 1
  const rows = [...state.rows.slice(0, below), emptyRow(), ...state.rows.slice(below)]
  return focused(changed(state, rows), { row: below, column: 'code' })
}

function removeRows(state: GridState): GridState {
  const area = selected(state)
  const rows = state.rows.filter((_, index) => index < area.top || index > area.bottom)
  const next = changed(state, rows.length === 0 ? [emptyRow()] : rows)
  return focused(next, { row: area.top, column: state.focus.column })
}

function showU(state: GridState, show: boolean): GridState {
  const rows = show ? state.rows : state.rows.map((row) => (row.u === '' ? row : { ...row, u: '' }))
  const isSame = rows.every((row, index) => row === state.rows[index])
  const next = { ...(isSame ? state : changed(state, rows)), hasU: show }
  return focused(next, { row: state.focus.row, column: show ? 'u' : 'measured' })
}

function undo(state: GridState): GridState {
  const before = state.past.at(-1)
  if (!before) return { ...state, editing: null }
  const hasU = state.hasU || before.some((row) => row.u !== '')
  const next = {
    ...state,
    hasU,
    rows: before,
    past: state.past.slice(0, -1),
    future: [state.rows, ...state.future],
    editing: null,
    report: null,
  }
  return focused(next, state.focus)
}

function redo(state: GridState): GridState {
  const [after, ...future] = state.future
  if (!after) return state
  const next = {
    ...state,
    rows: after,
    past: [...state.past, state.rows],
    future,
    editing: null,
    report: null,
  }
  return focused(next, state.focus)
}

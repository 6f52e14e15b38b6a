import { type ClipboardEvent, type Dispatch, type KeyboardEvent, useEffect, useId, useRef } from 'react'
import { GridHead } from './grid-head.tsx'
import { keyInField, keyOnCell } from './grid-keys.ts'
import type { GridAction } from './grid-reducer.ts'
import { GridRow } from './grid-row.tsx'
import { columnsOf, type GridState, isInput, selected } from './grid-state.ts'
import type { RowView } from './row-view.ts'
import { isBurst, type KeyTimes, noKeys, withKey } from './typed-burst.ts'

type PointsGridProps = {
  label: string
  state: GridState
  dispatch: Dispatch<GridAction>
  views: readonly RowView[]
  /** Recorded or waiting to be sent: the cells can be read and copied, not changed. */
  isFixed: boolean
  copyText: (state: GridState) => string
  onPaste: (text: string) => void
  /** A barcode reader's burst that began on a cell. */
  onScan: (text: string) => void
}

/** The points as a spreadsheet: one tab stop, arrows, typing replaces, F2 edits, blocks go in and out. */
export function PointsGrid(props: PointsGridProps) {
  const { state, dispatch, views, isFixed } = props
  const table = useRef<HTMLTableElement>(null)
  const keys = useRef<KeyTimes>(noKeys)
  const ownId = useId()
  const columns = columnsOf(state)
  const area = selected(state)
  useFollowFocus(table, state)

  const onKeyDown = (event: KeyboardEvent) => {
    if (event.nativeEvent.isComposing) return
    keys.current = withKey(keys.current, event.key, event.timeStamp)
    if (state.editing) {
      const burst = event.key === 'Enter' && isBurst(keys.current, state.editing.text)
      const action = burst ? ({ do: 'cancel' } as const) : keyInField(state, event)
      if (!action) return
      if (burst && state.editing) props.onScan(state.editing.text)
      event.preventDefault()
      dispatch(action)
      return
    }
    const action = keyOnCell(state, event)
    if (!action || (isFixed && changes.has(action.do))) return
    event.preventDefault()
    dispatch(action)
  }
  const onCopy = (event: ClipboardEvent) => {
    if (state.editing) return
    event.preventDefault()
    event.clipboardData.setData('text/plain', props.copyText(state))
    if (event.type === 'cut' && !isFixed) dispatch({ do: 'clear' })
  }
  const onPaste = (event: ClipboardEvent) => {
    const text = event.clipboardData.getData('text/plain')
    // One value pasted into a field that is open goes in at the caret, as in any field.
    if (isFixed || (state.editing && !/[\t\r\n]/.test(text.trim()))) return
    event.preventDefault()
    props.onPaste(text)
  }
  const grid = {
    role: 'grid',
    'aria-label': props.label,
    'aria-describedby': `${ownId}-keys`,
    'aria-multiselectable': true,
    'aria-rowcount': state.rows.length + 1,
    ...(isFixed ? { 'aria-readonly': true } : {}),
  }
  return (
    <>
      <p id={`${ownId}-keys`} className="sr-only">
        A spreadsheet: arrows move, typing replaces, F2 edits, Enter goes down, Tab right, Control V takes a
        block, Control Z undoes.
      </p>
      <div className="-m-0.5 overflow-x-auto p-0.5">
        <table
          ref={table}
          {...grid}
          data-own-keys
          onKeyDown={onKeyDown}
          onCopy={onCopy}
          onCut={onCopy}
          onPaste={onPaste}
          className="points-grid w-full border-collapse text-body"
        >
          <GridHead columns={columns} />
          <tbody>
            {state.rows.map((row, index) => (
              <GridRow
                // biome-ignore lint/suspicious/noArrayIndexKey: a row of a spreadsheet is its place
                key={index}
                index={index}
                row={row}
                view={views[index]}
                columns={columns}
                area={area}
                focusColumn={state.focus.row === index ? state.focus.column : null}
                editing={state.focus.row === index ? state.editing : null}
                isFixed={isFixed}
                dispatch={dispatch}
              />
            ))}
          </tbody>
        </table>
      </div>
    </>
  )
}

const changes = new Set<GridAction['do']>(['edit', 'clear', 'undo', 'redo'])

/** Focus goes where the state says, but only while it is in the grid already. */
function useFollowFocus(table: { current: HTMLTableElement | null }, state: GridState): void {
  const { row, column } = state.focus
  const isTyping = state.editing !== null && isInput(column)
  useEffect(() => {
    const active = document.activeElement
    const isInside = table.current?.contains(active) || active === document.body
    const wasHere = table.current?.dataset.held === 'true'
    if (!isInside || (active === document.body && !wasHere)) return
    const cell = table.current?.querySelector<HTMLElement>(`[data-cell="${row}-${column}"]`)
    const target = isTyping ? cell?.querySelector('input') : cell
    if (target && target !== active) target.focus()
  }, [row, column, isTyping, table])
  useEffect(() => {
    const own = table.current
    if (!own) return
    const hold = () => {
      own.dataset.held = 'true'
    }
    const release = (event: FocusEvent) => {
      // The field of a cell leaves the page when it closes; that is not a leaving of the grid.
      if (event.relatedTarget !== null) own.dataset.held = 'false'
    }
    own.addEventListener('focusin', hold)
    own.addEventListener('focusout', release)
    return () => {
      own.removeEventListener('focusin', hold)
      own.removeEventListener('focusout', release)
    }
  }, [table])
}

import type { KeyboardEvent } from 'react'
import { type GridAction, nextInput } from './grid-reducer.ts'
import { columnsOf, type GridState, isInput } from './grid-state.ts'

type Key = Pick<KeyboardEvent, 'key' | 'shiftKey' | 'ctrlKey' | 'metaKey' | 'altKey'>

const arrows = { ArrowUp: 'up', ArrowDown: 'down', ArrowLeft: 'left', ArrowRight: 'right' } as const
type Arrow = keyof typeof arrows
const isArrow = (key: string): key is Arrow => key in arrows

/** What a key does while a cell is focused and nothing is being typed; null leaves it to the browser and the page. */
export function keyOnCell(state: GridState, event: Key): GridAction | null {
  const { key, shiftKey, altKey } = event
  const ctrl = event.ctrlKey || event.metaKey
  if (altKey) return null
  if (isArrow(key)) return { do: 'move', to: arrows[key], extend: shiftKey, far: ctrl }
  if (ctrl) return keyWithCtrl(state, key, shiftKey)
  if (key === 'Tab') return tab(state, shiftKey)
  if (key === 'Home') return { do: 'move', to: 'left', far: true, extend: shiftKey }
  if (key === 'End') return { do: 'move', to: 'right', far: true, extend: shiftKey }
  if (key === 'PageUp') return { do: 'move', to: 'up', far: true, extend: shiftKey }
  if (key === 'PageDown') return { do: 'move', to: 'down', far: true, extend: shiftKey }
  if (key === 'Enter') return { do: 'move', to: shiftKey ? 'up' : 'down' }
  if (key === 'Delete' || key === 'Backspace') return { do: 'clear' }
  const { column, row } = state.focus
  if (!isInput(column)) return null
  if (key === 'F2') return { do: 'edit', editing: { text: state.rows[row]?.[column] ?? '', mode: 'edit' } }
  if (key.length === 1) return { do: 'edit', editing: { text: key, mode: 'replace' } }
  return null
}

function keyWithCtrl(state: GridState, key: string, shift: boolean): GridAction | null {
  const letter = key.toLowerCase()
  if (letter === 'z') return { do: shift ? 'redo' : 'undo' }
  if (letter === 'y') return { do: 'redo' }
  if (letter === 'a') return { do: 'select-all' }
  if (key === 'Home') return { do: 'focus', place: { row: 0, column: 'code' } }
  if (key === 'End')
    return {
      do: 'focus',
      place: { row: Number.MAX_SAFE_INTEGER, column: columnsOf(state).at(-1) ?? 'measured' },
    }
  return null
}

/** Past the last or first cell Tab leaves the grid, so that nobody is caught in it. */
function tab(state: GridState, shift: boolean): GridAction | null {
  if (!nextInput(state, shift ? -1 : 1)) return null
  return { do: 'move', to: shift ? 'previous' : 'next' }
}

/** What a key does in the field of a cell. */
export function keyInField(state: GridState, event: Key): GridAction | null {
  const { key, shiftKey, altKey } = event
  if (altKey || event.ctrlKey || event.metaKey) return null
  if (key === 'Escape') return { do: 'cancel' }
  if (key === 'Enter') return { do: 'commit', leave: shiftKey ? 'up' : 'down' }
  if (key === 'Tab') {
    if (!nextInput(state, shiftKey ? -1 : 1)) return null
    return { do: 'commit', leave: shiftKey ? 'previous' : 'next' }
  }
  if (key === 'ArrowUp' || key === 'ArrowDown') return { do: 'commit', leave: arrows[key] }
  if (key === 'F2' && state.editing) return { do: 'edit', editing: { ...state.editing, mode: 'edit' } }
  if (isArrow(key) && state.editing?.mode === 'replace') return { do: 'commit', leave: arrows[key] }
  return null
}

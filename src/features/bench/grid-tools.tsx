import type { Dispatch } from 'react'
import { Button } from '../../ui/button.tsx'
import type { GridAction } from './grid-reducer.ts'
import type { GridState } from './grid-state.ts'

type GridToolsProps = {
  state: GridState
  dispatch: Dispatch<GridAction>
  onReadings: () => void
  onSave: () => void
  onDiscard: () => void
  canSave: boolean
  canDiscard: boolean
}

/** Acts on the grid that a key alone would hide. */
export function GridTools({
  state,
  dispatch,
  onReadings,
  onSave,
  onDiscard,
  canSave,
  canDiscard,
}: GridToolsProps) {
  const small = '!text-small'
  return (
    <div className="mt-1 flex flex-wrap gap-x-3 print:hidden">
      <Button look="quiet" className={small} onClick={() => dispatch({ do: 'add-row' })}>
        Add row
      </Button>
      <Button look="quiet" className={small} onClick={() => dispatch({ do: 'remove-rows' })}>
        Remove row {state.focus.row + 1}
      </Button>
      <Button look="quiet" className={small} onClick={onReadings}>
        Readings of row {state.focus.row + 1}
      </Button>
      <Button
        look="quiet"
        className={small}
        aria-pressed={state.hasU}
        onClick={() => dispatch({ do: 'show-u', show: !state.hasU })}
      >
        {state.hasU ? 'Without u' : 'With u'}
      </Button>
      {canSave ? (
        <Button look="quiet" className={small} onClick={onSave}>
          Save CSV
        </Button>
      ) : null}
      {canDiscard ? (
        <Button look="quiet" className={small} onClick={onDiscard}>
          Discard draft
        </Button>
      ) : null}
    </div>
  )
}

import { type Dispatch, memo, type ReactNode } from 'react'
import { NumberText } from '../../ui/number-text.tsx'
import { Verdict, VerdictMark } from '../../ui/verdict.tsx'
import { columnNames, narrowHidden } from './grid-head.tsx'
import type { GridAction } from './grid-reducer.ts'
import { type Area, type Column, type Editing, isInput, isSelected, type Row } from './grid-state.ts'
import type { RowView } from './row-view.ts'

type GridRowProps = {
  index: number
  row: Row
  view: RowView | undefined
  columns: readonly Column[]
  area: Area
  focusColumn: Column | null
  editing: Editing | null
  isFixed: boolean
  dispatch: Dispatch<GridAction>
}

const plainNumber = /^[-+\u2212]?\d+(\.\d+)?$/

export const GridRow = memo(function GridRow(props: GridRowProps) {
  const { index, columns, focusColumn } = props
  const row = { role: 'row', 'aria-rowindex': index + 2 }
  return (
    <tr {...row} className="border-b border-hair">
      {columns.map((column) => (
        <GridCell key={column} {...props} column={column} hasFocus={focusColumn === column} />
      ))}
    </tr>
  )
})

type GridCellProps = GridRowProps & { column: Column; hasFocus: boolean }

function GridCell(props: GridCellProps) {
  const { index, column, hasFocus, editing, view, isFixed, dispatch, area } = props
  const problem = isInput(column) ? view?.problems[column] : undefined
  const isOpen = hasFocus && editing !== null && isInput(column)
  const isMarked = isSelected(area, index, column) && (area.bottom > area.top || area.columns.length > 1)
  const cell = {
    role: 'gridcell',
    tabIndex: hasFocus && !isOpen ? 0 : -1,
    'data-cell': `${index}-${column}`,
    'aria-selected': isSelected(area, index, column),
    ...(isInput(column) && !isFixed ? {} : { 'aria-readonly': true }),
    ...(problem ? { 'aria-invalid': true, 'aria-describedby': problemId(index, column) } : {}),
  }
  const edit = () => {
    if (!isFixed && isInput(column)) {
      dispatch({ do: 'edit', editing: { text: props.row[column], mode: 'edit' } })
    }
  }
  return (
    <td
      {...cell}
      onPointerDown={(event) => {
        if (isOpen) return
        dispatch({ do: 'focus', place: { row: index, column }, extend: event.shiftKey })
      }}
      onFocus={() => {
        if (!hasFocus) dispatch({ do: 'focus', place: { row: index, column } })
      }}
      onDoubleClick={edit}
      onPointerUp={(event) => {
        // A finger has no F2: a tap opens the cell with the keyboard of the device.
        if (event.pointerType === 'touch') edit()
      }}
      className={`relative h-6 px-1 last:pr-0 focus:outline-2 focus:-outline-offset-1 focus:outline-focus ${look(column, isMarked, problem !== undefined)} ${narrowHidden(column)}`}
    >
      {isOpen ? <CellField {...props} problem={problem} /> : <Content {...props} />}
    </td>
  )
}

export const problemId = (row: number, column: string): string => `cell-problem-${row}-${column}`

function look(column: Column, isMarked: boolean, isWrong: boolean): string {
  const side = column === 'decision' ? 'pl-3 text-left' : 'text-right'
  const tone = column === 'ideal' || column === 'expanded' ? 'text-ink-2' : ''
  const ground = column === 'measured' || column === 'u' ? 'bg-field' : ''
  const line = column === 'measured' || column === 'u' ? 'border-b border-rule' : ''
  const wrong = isWrong ? 'border-b-2 border-bad' : line
  return `${side} ${tone} ${isMarked ? 'bg-shade' : ground} ${wrong}`
}

function CellField({
  index,
  column,
  editing,
  view,
  dispatch,
  problem,
}: GridCellProps & { problem: string | undefined }) {
  const name = columnNames[column].spoken
  return (
    <input
      // biome-ignore lint/a11y/noAutofocus: the cell that is typed in is the one that has the focus
      autoFocus
      aria-label={view?.code === null || view?.code === undefined ? name : `${name}, code ${view.code}`}
      aria-invalid={problem !== undefined}
      aria-describedby={problem ? problemId(index, column) : undefined}
      value={editing?.text ?? ''}
      onChange={(event) => dispatch({ do: 'type', text: event.target.value })}
      onBlur={() => dispatch({ do: 'commit' })}
      autoComplete="off"
      spellCheck={false}
      inputMode={column === 'code' ? 'text' : 'decimal'}
      enterKeyHint="next"
      className="absolute inset-0 w-full bg-field px-1 text-right text-body text-ink outline-2 outline-focus"
    />
  )
}

function Content({ column, row, view }: GridCellProps): ReactNode {
  if (isInput(column)) {
    const text = row[column]
    const as = column === 'measured' ? view?.measuredAs : null
    if (as) return <span title={text}>{as}</span>
    return plainNumber.test(text.trim()) ? <NumberText>{text}</NumberText> : text
  }
  if (column === 'decision') return view?.decision ? <Verdict verdict={view.decision} /> : null
  const text = view?.[column]
  if (text === null || text === undefined) return null
  return (
    <>
      {column === 'residual' && view?.isFlagged ? (
        <span className="mr-2 inline-block">
          <VerdictMark verdict="suspect" label="suspect" />
        </span>
      ) : null}
      <NumberText>{text}</NumberText>
    </>
  )
}

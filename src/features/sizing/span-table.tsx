import { type KeyboardEvent, useState } from 'react'
import type { SpanTable as SpanTableData } from '../../../shared/solver/sizing/span-table.ts'
import { Section } from '../../ui/section.tsx'
import { RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { SpanCellButton } from './span-cell.tsx'
import { marginText, spanText, spanUnit } from './span-words.ts'

export type SpanTableProps = {
  table: SpanTableData
  /** Tries a cell without saving; left out, the table only shows. */
  onTry?: ((bits: number, lowV: number, highV: number) => void) | undefined
}

type Cell = { row: number; column: number }

const moves: Record<string, (at: Cell, last: Cell) => Cell> = {
  ArrowRight: (at, last) => ({ ...at, column: Math.min(at.column + 1, last.column) }),
  ArrowLeft: (at) => ({ ...at, column: Math.max(at.column - 1, 0) }),
  ArrowDown: (at, last) => ({ ...at, row: Math.min(at.row + 1, last.row) }),
  ArrowUp: (at) => ({ ...at, row: Math.max(at.row - 1, 0) }),
  Home: (at) => ({ ...at, column: 0 }),
  End: (at, last) => ({ ...at, column: last.column }),
}

/** Resolution × span: reach stands once in the head of its column, shape and step margin in the cells. Bits. */
export function SpanTable({ table, onTry }: SpanTableProps) {
  const { which, columns, rows } = table
  const own = {
    row: Math.max(
      0,
      rows.findIndex(({ cells }) => cells.some((cell) => cell.own)),
    ),
    column: Math.max(
      0,
      columns.findIndex((column) => column.own),
    ),
  }
  const [walked, setWalked] = useState<Cell | null>(null)
  const last = { row: rows.length - 1, column: columns.length - 1 }
  const at = walked && walked.row <= last.row && walked.column <= last.column ? walked : own
  const unit = spanUnit(columns)
  const walk = (event: KeyboardEvent<HTMLElement>, from: Cell) => {
    const move = moves[event.key]
    if (!move || event.ctrlKey || event.metaKey || event.altKey) return
    event.preventDefault()
    const next = move(from, last)
    setWalked(next)
    event.currentTarget
      .closest('table')
      ?.querySelector<HTMLElement>(`[data-cell="${next.row} ${next.column}"]`)
      ?.focus()
  }
  return (
    <Section title={`Resolution × span, ${which}`}>
      <Table
        caption={`Resolution × span, ${which}: bits to spare. Arrow keys walk the cells, Enter tries one.`}
      >
        <thead>
          <tr>
            <Th>bits</Th>
            {columns.map((column) => (
              <Th key={`${column.lowV} ${column.highV}`} align="right" className="!px-0.5 whitespace-nowrap">
                {spanText(column, unit)}
                <span className={`block ${(column.reachMargin ?? 0) < 0 ? 'text-bad' : 'text-ink-2'}`}>
                  <span className="sr-only">reach </span>
                  {column.reachSpareBits === null ? 'none' : marginText(column.reachSpareBits)}
                </span>
              </Th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map(({ bits, cells }, row) => (
            <tr key={bits}>
              <RowHead className="!font-normal">{bits}</RowHead>
              {cells.map((cell, column) => {
                const span = columns[column]!
                return (
                  <Td key={`${span.lowV} ${span.highV}`} align="right" className="!p-0">
                    <SpanCellButton
                      cell={cell}
                      name={`${bits} bits, ${spanText(span, unit)}`}
                      place={`${row} ${column}`}
                      isStop={at.row === row && at.column === column}
                      onKeyDown={(event) => walk(event, { row, column })}
                      onTry={onTry && (() => onTry(bits, span.lowV, span.highV))}
                    />
                  </Td>
                )
              })}
            </tr>
          ))}
        </tbody>
      </Table>
    </Section>
  )
}

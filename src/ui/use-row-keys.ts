import { useState } from 'react'
import { flushSync } from 'react-dom'

function link(row: number): HTMLAnchorElement | null {
  return document.querySelector<HTMLAnchorElement>(`main [data-row="${row}"]`)
}

const isInList = () => document.activeElement?.hasAttribute('data-row') ?? false

export type RowKeys = {
  row: number
  move: (by: number) => void
  open: () => void
  /** Makes a row the current one; the focus goes along if it is in the list. */
  set: (row: number) => void
}

/** The current row: `j` and `k` move it and the focus with it, Enter opens it. */
export function useRowKeys(count: number, start = 0): RowKeys {
  const [row, setRow] = useState(start)
  // A windowed list draws the row because it is the current one: only then can it take the focus.
  const draw = (next: number) => flushSync(() => setRow(next))
  return {
    row,
    move: (by) => {
      // The first key lands on the shaded row itself when the focus is not in the list yet.
      const next = Math.max(0, Math.min(count - 1, isInList() || by < 0 || row > 0 ? row + by : row))
      draw(next)
      link(next)?.focus()
    },
    open: () => link(row)?.click(),
    set: (next) => {
      if (next === row) return
      const wasInList = isInList()
      draw(next)
      if (wasInList) link(next)?.focus({ preventScroll: true })
    },
  }
}

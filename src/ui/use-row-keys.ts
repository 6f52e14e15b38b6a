import { useCallback, useState } from 'react'

function link(row: number): HTMLAnchorElement | null {
  return document.querySelector<HTMLAnchorElement>(`main [data-row="${row}"]`)
}

/** The current row: `j` and `k` move it and the focus with it, Enter opens it. */
export function useRowKeys(count: number): {
  row: number
  move: (by: number) => void
  open: () => void
  reset: () => void
} {
  const [row, setRow] = useState(0)
  return {
    row,
    move: (by) => {
      // The first key lands on the shaded row itself when the focus is not in the list yet.
      const inList = document.activeElement?.hasAttribute('data-row') ?? false
      const next = Math.max(0, Math.min(count - 1, inList || by < 0 || row > 0 ? row + by : row))
      setRow(next)
      link(next)?.focus()
    },
    open: () => link(row)?.click(),
    reset: useCallback(() => setRow(0), []),
  }
}

import { useCallback, useEffect, useMemo, useReducer, useRef, useState } from 'react'
import { type Draft, type DraftFields, isWorthKeeping, newDraft, readDraft, writeDraft } from './draft.ts'
import { gridReducer } from './grid-reducer.ts'
import { type GridKind, newGrid, type Row, rowsNow } from './grid-state.ts'

const writeAfterMs = 300

/**
 * Everything typed for one measurement, kept on this computer at most a third of a second later, and at once when
 * the page goes away. One of these lives as long as its measurement is on the page: the caller keys it by name.
 */
export function useKeptDraft(name: string, kind: GridKind, planned: readonly Row[]) {
  const [first] = useState(() => readDraft(name))
  const start = first ?? newDraft(planned)
  const [grid, dispatch] = useReducer(gridReducer, start, ({ rows, hasU }) => newGrid(rows, kind, hasU))
  const [fields, setFields] = useState<DraftFields>(() => {
    const { rows: _, hasU: __, ...rest } = start
    return rest
  })
  // The same array as long as the grid is the same: what is computed from it is computed once.
  const rows = useMemo(() => rowsNow(grid), [grid])
  const draft: Draft = { ...fields, rows, hasU: grid.hasU }
  /** The grid as planned again, in one step that can be undone; the other fields empty. */
  const startAnew = useCallback(() => {
    dispatch({ do: 'rows', rows: planned, hasU: false })
    const { rows: _, hasU: __, ...rest } = newDraft(planned)
    setFields(rest)
  }, [planned])
  const setField = useCallback(
    <K extends keyof DraftFields>(field: K, value: DraftFields[K]) =>
      setFields((before) => ({ ...before, [field]: value })),
    [],
  )
  const flush = useWriting(name, draft)
  return { grid, dispatch, fields, setField, startAnew, wasRestored: first !== null, draft, flush }
}

/** Writes a while after the first change, not after the last: steady typing is kept too. */
function useWriting(name: string, draft: Draft): () => void {
  const latest = useRef(draft)
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined)
  const text = JSON.stringify(draft)
  const written = useRef(text)
  const flush = useCallback(() => {
    clearTimeout(timer.current)
    timer.current = undefined
    const now = latest.current
    const nowText = JSON.stringify(now)
    if (nowText === written.current) return
    written.current = nowText
    writeDraft(name, isWorthKeeping(now) ? now : null)
  }, [name])
  useEffect(() => {
    latest.current = draft
    if (text !== written.current && timer.current === undefined)
      timer.current = setTimeout(flush, writeAfterMs)
  })
  useEffect(() => {
    window.addEventListener('pagehide', flush)
    document.addEventListener('visibilitychange', flush)
    return () => {
      window.removeEventListener('pagehide', flush)
      document.removeEventListener('visibilitychange', flush)
      flush()
    }
  }, [flush])
  return flush
}

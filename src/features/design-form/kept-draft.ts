import { useCallback, useEffect, useRef } from 'react'
import { readStored, writeStored } from '../../lib/storage.ts'
import type { FormDoc } from './form-doc.ts'
import type { FormStore } from './form-store.ts'
import { withWhatIf } from './what-if.ts'

/** What this computer keeps of a draft, and the state at the server that it was typed over. */
export type KeptDraft = { doc: FormDoc; etag: string | null }

const writeAfterMs = 300
export const draftName = (key: string, number: number | null): string =>
  `design.draft.${encodeURIComponent(key)}.${number ?? 'new'}`

export function readDraft(name: string): KeptDraft | null {
  const stored = readStored(name)
  if (typeof stored !== 'object' || stored === null) return null
  const { doc, etag } = stored as { doc?: Partial<FormDoc>; etag?: unknown }
  if (typeof doc !== 'object' || doc === null) return null
  const { values, lines, ranges, nextId } = doc
  if (!values || !Array.isArray(lines?.gain) || !Array.isArray(lines.offset)) return null
  if (!Array.isArray(ranges) || typeof nextId !== 'number') return null
  const whole = withWhatIf({ values, lines, ranges, nextId }, {})
  return { doc: whole, etag: typeof etag === 'string' ? etag : null }
}

type Keeping = {
  isEditable: boolean
  /** What the server has; null while it has something else, or something is tried. */
  saved: FormDoc | null
  etag: string | null
}

/**
 * Kept at most a third of a second after a key, straight from the form, however busy the page is with drawing; and at
 * once when the page goes away. What the server has is kept no longer.
 */
export function useKeptDraft(name: string, store: FormStore, keeping: Keeping): void {
  const latest = useRef({ name, keeping })
  latest.current = { name, keeping }
  const written = useRef(name)
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined)
  const flush = useCallback(() => {
    if (timer.current === undefined) return
    clearTimeout(timer.current)
    timer.current = undefined
    const { name: to, keeping: now } = latest.current
    // A new design has another name once the server has it.
    if (written.current !== to) writeStored(written.current, null)
    written.current = to
    const { doc, before } = store.get()
    const isKept = now.isEditable && (before ?? doc) !== now.saved
    writeStored(to, isKept ? { doc: before ?? doc, etag: now.etag } : null)
  }, [store])
  const schedule = useCallback(() => {
    timer.current ??= setTimeout(flush, writeAfterMs)
  }, [flush])
  const { isEditable, saved, etag } = keeping
  // biome-ignore lint/correctness/useExhaustiveDependencies: each of them changes what is to be kept
  useEffect(schedule, [name, isEditable, saved, etag, schedule])
  useEffect(() => store.subscribe(schedule), [store, schedule])
  useEffect(() => {
    window.addEventListener('pagehide', flush)
    document.addEventListener('visibilitychange', flush)
    return () => {
      window.removeEventListener('pagehide', flush)
      document.removeEventListener('visibilitychange', flush)
      flush()
    }
  }, [flush])
}

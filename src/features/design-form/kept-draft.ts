import { useCallback, useEffect, useRef } from 'react'
import { readStored, writeStored } from '../../lib/storage.ts'
import type { FormDoc } from './form-doc.ts'
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

/** Kept at most a third of a second after a key, and at once when the page goes away. Null takes it away. */
export function useKeptDraft(name: string, draft: KeptDraft | null): void {
  const pending = useRef<{ name: string; draft: KeptDraft | null } | null>(null)
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined)
  const flush = useCallback(() => {
    clearTimeout(timer.current)
    timer.current = undefined
    if (pending.current) writeStored(pending.current.name, pending.current.draft)
    pending.current = null
  }, [])
  const doc = draft?.doc
  const etag = draft?.etag ?? null
  useEffect(() => {
    pending.current = { name, draft: doc === undefined ? null : { doc, etag } }
    timer.current ??= setTimeout(flush, writeAfterMs)
  }, [name, doc, etag, flush])
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

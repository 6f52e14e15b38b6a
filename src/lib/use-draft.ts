import { useCallback, useEffect, useRef, useState } from 'react'
import { readStored, writeStored } from './storage.ts'

const writeAfterMs = 300

/**
 * State that survives a killed tab, an ended session and a lost network: kept on this computer within a third of a
 * second, and at once when the page is hidden. `parse` gives null for anything that is not a draft of this kind.
 */
export function useDraft<T>(
  name: string,
  parse: (stored: unknown) => T | null,
  initial: T,
): [T, (next: T) => void, () => void] {
  const [value, setValue] = useState<T>(() => parse(readStored(name)) ?? initial)
  const pending = useRef<{ name: string; value: T } | null>(null)
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined)

  const flush = useCallback(() => {
    clearTimeout(timer.current)
    timer.current = undefined
    if (pending.current) writeStored(pending.current.name, pending.current.value)
    pending.current = null
  }, [])

  const change = useCallback(
    (next: T) => {
      setValue(next)
      pending.current = { name, value: next }
      // Not begun anew by each key: steady typing is written too.
      timer.current ??= setTimeout(flush, writeAfterMs)
    },
    [name, flush],
  )

  const discard = useCallback(() => {
    clearTimeout(timer.current)
    timer.current = undefined
    pending.current = null
    writeStored(name, null)
    setValue(initial)
  }, [name, initial])

  useEffect(() => {
    window.addEventListener('pagehide', flush)
    document.addEventListener('visibilitychange', flush)
    return () => {
      window.removeEventListener('pagehide', flush)
      document.removeEventListener('visibilitychange', flush)
      flush()
    }
  }, [flush])

  return [value, change, discard]
}

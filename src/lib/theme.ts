import { useSyncExternalStore } from 'react'
import { readStored, writeStored } from './storage.ts'

/** The same key and values as in src/public/theme.js, which applies them before the first paint. */
const key = 'theme'
export type Theme = 'system' | 'light' | 'dark'
const listeners = new Set<() => void>()

export function theme(): Theme {
  const stored = readStored(key)
  return stored === 'light' || stored === 'dark' ? stored : 'system'
}

export function setTheme(next: Theme): void {
  writeStored(key, next === 'system' ? null : next)
  if (next === 'system') delete document.documentElement.dataset.theme
  else document.documentElement.dataset.theme = next
  for (const listener of listeners) listener()
}

export function useTheme(): Theme {
  return useSyncExternalStore((listener) => {
    listeners.add(listener)
    return () => listeners.delete(listener)
  }, theme)
}

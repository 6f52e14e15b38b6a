import { useSyncExternalStore } from 'react'

/** Whether a media query holds; `fallback` where there is no screen to ask. */
export function useMedia(query: string, fallback: boolean): boolean {
  return useSyncExternalStore(
    (listener) => {
      const list = typeof window.matchMedia === 'function' ? window.matchMedia(query) : null
      list?.addEventListener('change', listener)
      return () => list?.removeEventListener('change', listener)
    },
    () => (typeof window.matchMedia === 'function' ? window.matchMedia(query).matches : fallback),
  )
}

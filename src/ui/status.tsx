import { useSyncExternalStore } from 'react'

/** One polite live region for the whole app: what just happened, said once and shown for a while. */
let current = { text: '', id: 0 }
const listeners = new Set<() => void>()
let timer: ReturnType<typeof setTimeout> | undefined
const shownForMs = 6000

function set(text: string): void {
  current = { text, id: current.id + 1 }
  for (const listener of listeners) listener()
}

/** Says a finished act: "Recorded as 1 004 317 at 14:09:40." */
export function announce(text: string): void {
  clearTimeout(timer)
  set(text)
  timer = setTimeout(() => set(''), shownForMs)
}

function subscribe(listener: () => void): () => void {
  listeners.add(listener)
  return () => listeners.delete(listener)
}

export function StatusRegion() {
  const { text, id } = useSyncExternalStore(subscribe, () => current)
  return (
    <div
      role="status"
      aria-live="polite"
      className="pointer-events-none fixed inset-x-0 bottom-3 z-10 flex justify-center print:hidden"
    >
      {text ? (
        <span key={id} className="border border-rule bg-paper px-3 py-1.5 text-body text-ink">
          {text}
        </span>
      ) : null}
    </div>
  )
}

import { type KeyboardEvent, useState } from 'react'

type Steps = Readonly<Record<string, (at: number, last: number) => number>>

/** Points in reading order. */
const across: Steps = {
  ArrowRight: (at, last) => Math.min(at + 1, last),
  ArrowDown: (at, last) => Math.min(at + 1, last),
  ArrowLeft: (at) => Math.max(at - 1, 0),
  ArrowUp: (at) => Math.max(at - 1, 0),
  Home: () => 0,
  End: (_, last) => last,
}

/** Stops that stand above one another, the lowest first. */
export const upward: Steps = {
  ArrowUp: (at, last) => Math.min(at + 1, last),
  ArrowDown: (at) => Math.max(at - 1, 0),
  Home: () => 0,
  End: (_, last) => last,
}

export type PointStop = {
  tabIndex: number
  role: 'img'
  'data-stop': number
  onKeyDown: (event: KeyboardEvent<SVGElement>) => void
  onFocus: () => void
}

/**
 * One tab stop for a plot; arrow keys, Home and End walk its points. Where a drawing has several walks, each stands in an
 * element with `data-walk`.
 */
export function useWalk(count: number, steps: Steps = across): (index: number) => PointStop {
  const [at, setAt] = useState(0)
  const stop = Math.min(at, Math.max(0, count - 1))
  return (index) => ({
    tabIndex: index === stop ? 0 : -1,
    role: 'img',
    'data-stop': index,
    onFocus: () => setAt(index),
    onKeyDown: (event) => {
      const step = steps[event.key]
      if (!step || event.ctrlKey || event.metaKey || event.altKey) return
      event.preventDefault()
      const next = step(index, count - 1)
      setAt(next)
      const walk = event.currentTarget.closest('[data-walk]') ?? event.currentTarget.ownerSVGElement
      walk?.querySelector<SVGElement>(`[data-stop="${next}"]`)?.focus()
    },
  })
}

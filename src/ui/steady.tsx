import { type ReactNode, useEffect, useRef } from 'react'

/**
 * A block that is laid out by itself: what changes in it is no work for the page round it, unless its height changes too.
 * As tall as its content, which is measured before it is painted.
 */
export function Steady({ children }: { children: ReactNode }) {
  const box = useRef<HTMLDivElement>(null)
  const content = useRef<HTMLDivElement>(null)
  useEffect(() => {
    if (content.current === null || typeof ResizeObserver === 'undefined') return
    const observer = new ResizeObserver(([seen]) => {
      box.current?.style.setProperty('--steady-height', `${seen?.contentRect.height ?? 0}px`)
      box.current?.setAttribute('data-steady', '')
    })
    observer.observe(content.current)
    return () => observer.disconnect()
  }, [])
  return (
    <div ref={box}>
      <div ref={content}>{children}</div>
    </div>
  )
}

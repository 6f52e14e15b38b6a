import { type ReactNode, useEffect, useRef } from 'react'

/**
 * A block that is laid out by itself: what changes in it is no work for the page round it, unless its height changes too.
 * As tall as its content, which is measured before it is painted.
 */
export function Steady({ className, children }: { className?: string; children: ReactNode }) {
  const box = useRef<HTMLDivElement>(null)
  const content = useRef<HTMLDivElement>(null)
  useEffect(() => {
    if (content.current === null || typeof ResizeObserver === 'undefined') return
    const observer = new ResizeObserver(([seen]) => {
      const height = seen?.borderBoxSize[0]?.blockSize ?? 0
      box.current?.style.setProperty('--steady-height', `${height}px`)
      box.current?.setAttribute('data-steady', '')
    })
    observer.observe(content.current)
    return () => observer.disconnect()
  }, [])
  return (
    <div ref={box}>
      <div ref={content} className={className}>
        {children}
      </div>
    </div>
  )
}

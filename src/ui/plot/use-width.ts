import { type RefObject, useEffect, useLayoutEffect, useRef, useState } from 'react'

/** The width that an element has; plots are drawn at it and never scaled, so their text stays 11 px. */
export function useWidth(initial: number): { ref: RefObject<HTMLDivElement | null>; width: number } {
  const ref = useRef<HTMLDivElement>(null)
  const [width, setWidth] = useState(initial)
  // Before the first paint: a plot that is drawn too wide once makes a narrow page scroll sideways.
  useLayoutEffect(() => {
    const seen = ref.current?.clientWidth ?? 0
    if (seen > 0) setWidth(seen)
  }, [])
  useEffect(() => {
    const element = ref.current
    if (!element || typeof ResizeObserver === 'undefined') return
    const observer = new ResizeObserver((entries) => {
      const seen = Math.floor(entries[0]?.contentRect.width ?? 0)
      if (seen > 0) setWidth(seen)
    })
    observer.observe(element)
    return () => observer.disconnect()
  }, [])
  return { ref, width }
}

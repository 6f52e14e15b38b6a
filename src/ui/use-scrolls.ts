import { type RefObject, useEffect, useRef, useState } from 'react'

/** Whether a box is wider inside than outside: only then must the keyboard be able to reach it (WCAG 2.1.1). */
export function useScrolls(): [RefObject<HTMLDivElement | null>, boolean] {
  const ref = useRef<HTMLDivElement>(null)
  const [scrolls, setScrolls] = useState(false)
  useEffect(() => {
    const box = ref.current
    if (!box || typeof ResizeObserver === 'undefined') return
    const measure = () => setScrolls(box.scrollWidth > box.clientWidth + 1)
    const observer = new ResizeObserver(measure)
    observer.observe(box)
    if (box.firstElementChild) observer.observe(box.firstElementChild)
    measure()
    return () => observer.disconnect()
  }, [])
  return [ref, scrolls]
}

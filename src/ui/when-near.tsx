import { type ReactNode, useEffect, useRef, useState } from 'react'
import { flushSync } from 'react-dom'

/** Draws its content once it is about to be seen, or printed, and from then on; until then it keeps a place for it. */
export function WhenNear({
  name,
  minHeight,
  children,
}: {
  /** By which an act finds the place and scrolls to it. */
  name: string
  minHeight: number
  children: ReactNode
}) {
  const place = useRef<HTMLDivElement>(null)
  const [isNear, setNear] = useState(typeof IntersectionObserver === 'undefined')
  useEffect(() => {
    const element = place.current
    if (isNear || !element) return
    const show = () => setNear(true)
    const observer = new IntersectionObserver((seen) => {
      if (seen.some((one) => one.isIntersecting)) show()
    })
    observer.observe(element)
    // The browser takes its picture as soon as the listener returns.
    const showNow = () => flushSync(show)
    window.addEventListener('beforeprint', showNow)
    return () => {
      observer.disconnect()
      window.removeEventListener('beforeprint', showNow)
    }
  }, [isNear])
  return (
    <div
      ref={place}
      data-when-near={name}
      style={isNear ? undefined : { minHeight }}
      className={isNear ? undefined : 'print:hidden'}
    >
      {isNear ? children : null}
    </div>
  )
}

/** Stands on paper for what printing was too quick for; it is being brought, so the next print has it. */
export function NotOnPaper({ what }: { what: string }) {
  return (
    <p className="hidden py-1 text-ink-2 print:block">
      {what}: not ready when this was printed. Print again.
    </p>
  )
}

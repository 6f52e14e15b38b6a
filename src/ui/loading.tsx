import { useEffect, useState } from 'react'

/** Says what is being read, but only after 300 ms: quick answers never flicker. */
export function Loading({ children = 'Reading.' }: { children?: string }) {
  const [shown, setShown] = useState(false)
  useEffect(() => {
    const timer = setTimeout(() => setShown(true), 300)
    return () => clearTimeout(timer)
  }, [])
  return (
    <p role="status" className="min-h-6 py-3 text-body text-ink-2">
      {shown ? children : ''}
    </p>
  )
}

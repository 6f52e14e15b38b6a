import { useEffect, useState } from 'react'

/** Says what is being read, but only after 300 ms: quick answers never flicker. */
export function Loading({
  children = 'Reading.',
  page = false,
}: {
  children?: string
  /** Stands for a whole page, which has its heading even while it is read. */
  page?: boolean
}) {
  const [shown, setShown] = useState(false)
  useEffect(() => {
    const timer = setTimeout(() => setShown(true), 300)
    return () => clearTimeout(timer)
  }, [])
  return (
    <>
      {page ? <h1 className="sr-only">{children}</h1> : null}
      <p role="status" className="min-h-6 py-3 text-body text-ink-2">
        {shown ? children : ''}
      </p>
    </>
  )
}

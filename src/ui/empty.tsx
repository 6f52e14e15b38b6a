import type { ReactNode } from 'react'

/** Nothing here yet, and what to do about it. */
export function Empty({ children }: { children: ReactNode }) {
  return <div className="max-w-[44rem] py-3 text-text text-ink">{children}</div>
}

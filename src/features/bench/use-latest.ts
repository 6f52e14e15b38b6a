import { type RefObject, useRef } from 'react'

/** The newest value, for what happens later than the rendering that asked for it. */
export function useLatest<T>(value: T): RefObject<T> {
  const latest = useRef(value)
  latest.current = value
  return latest
}

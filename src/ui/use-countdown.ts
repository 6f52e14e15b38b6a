import { useEffect, useRef, useState } from 'react'

/** Seconds left; `turn` starts it again. Calls `onEnd` once at zero. */
export function useCountdown(seconds: number, turn: unknown, onEnd?: () => void): number {
  const [left, setLeft] = useState(seconds)
  const latest = useRef(onEnd)
  latest.current = onEnd
  // biome-ignore lint/correctness/useExhaustiveDependencies: a new turn starts the count again
  useEffect(() => {
    const endsAt = Date.now() + seconds * 1000
    setLeft(seconds)
    const timer = setInterval(() => {
      const now = Math.max(0, Math.ceil((endsAt - Date.now()) / 1000))
      setLeft(now)
      if (now > 0) return
      clearInterval(timer)
      latest.current?.()
    }, 250)
    return () => clearInterval(timer)
  }, [seconds, turn])
  return left
}

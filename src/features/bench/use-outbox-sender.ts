import { useEffect, useRef } from 'react'
import { useConnection } from '../../lib/connection.ts'
import { useOutbox, type Waiting } from './outbox.ts'
import { type Sent, sendWaiting } from './send-outbox.ts'

const againAfterMs = 8000

/** Sends what waits: when the page opens, when the server answers again, and every eight seconds while something waits. */
export function useOutboxSender(person: string, onSent: (item: Waiting, sent: Sent) => void): void {
  const waits = useOutbox().some((item) => item.person === person && item.refused === null)
  const { outage, sessionEnded } = useConnection()
  const latest = useRef(onSent)
  latest.current = onSent
  // biome-ignore lint/correctness/useExhaustiveDependencies: an outage that ends is a reason to try at once
  useEffect(() => {
    if (!waits || sessionEnded) return
    const send = () => void sendWaiting(person, (item, sent) => latest.current(item, sent))
    // A record that was just put in is being sent by its own form.
    const soon = setTimeout(send, 400)
    const again = setInterval(send, againAfterMs)
    window.addEventListener('online', send)
    return () => {
      clearTimeout(soon)
      clearInterval(again)
      window.removeEventListener('online', send)
    }
  }, [waits, person, outage, sessionEnded])
}

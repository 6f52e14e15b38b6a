import { useCallback } from 'react'
import { useOutboxSender } from '../features/bench/use-outbox-sender.ts'
import { usePerson } from '../features/session/use-person.ts'
import { announce } from '../ui/status.tsx'

/** Sends records that wait on this computer, from whichever page the person is on. */
export default function OutboxSender() {
  const { id } = usePerson()
  const say = useCallback((_: unknown, sent: { is: string }) => {
    if (sent.is === 'recorded') announce('A record that waited on this computer is sent.')
  }, [])
  useOutboxSender(id, say)
  return null
}

import { useQueryClient } from '@tanstack/react-query'
import { useCallback, useEffect, useRef, useState } from 'react'
import { getMe } from '../../shared/contract/session.ts'
import { api } from '../lib/api.ts'
import { useConnection } from '../lib/connection.ts'
import { Button } from '../ui/button.tsx'
import { Caution } from '../ui/caution.tsx'
import { useCountdown } from '../ui/use-countdown.ts'

/** Waits grow, so that a server that comes back is not run over. Seconds. */
const waits = [2, 4, 8, 15, 30] as const

/** Says that the server does not answer, counts down and tries again; then reads again what had failed. */
export function AwayBanner() {
  const { outage } = useConnection()
  const queryClient = useQueryClient()
  const wasAway = useRef(false)
  useEffect(() => {
    if (wasAway.current && outage === null) {
      void queryClient.refetchQueries({ predicate: (query) => query.state.status === 'error' })
    }
    wasAway.current = outage !== null
  }, [outage, queryClient])
  return outage === null ? null : <Away sentence={outage} />
}

function Away({ sentence }: { sentence: string }) {
  const [tries, setTries] = useState(0)
  const [trying, setTrying] = useState(false)
  const tryNow = useCallback(async () => {
    setTrying(true)
    // Any answer at all, a refusal too, ends the outage; `api` takes note of it.
    await api(getMe, {}).catch(() => undefined)
    setTrying(false)
    setTries((n) => n + 1)
  }, [])
  const left = useCountdown(waits[Math.min(tries, waits.length - 1)] ?? 30, tries, () => void tryNow())
  return (
    <div className="mb-3 print:hidden">
      <Caution tone="bad">
        <div className="flex flex-wrap items-center gap-x-3">
          <p role="status">{sentence} What you typed is kept on this computer.</p>
          <p>{trying ? 'Trying.' : `Trying again in ${left} s.`}</p>
          <Button disabled={trying} onClick={() => void tryNow()}>
            Try now
          </Button>
        </div>
      </Caution>
    </div>
  )
}

import { useEffect, useRef, useState } from 'react'
import type { LedgerReport } from '../../../shared/ledger/check/check-ledger.ts'
import type { FromLedgerWorker, ToLedgerWorker } from '../../lib/ledger-messages.ts'

/** What of a Worker the panel uses; tests hand in one of their own. */
export type LedgerWorker = {
  postMessage: (message: ToLedgerWorker) => void
  terminate: () => void
  onmessage: ((event: MessageEvent<FromLedgerWorker>) => void) | null
  onerror: ((event: ErrorEvent) => void) | null
}
export type StartLedgerWorker = () => LedgerWorker | Promise<LedgerWorker>

/** The worker and its address load with the first check. */
export const startBuiltWorker: StartLedgerWorker = async () => {
  const { startLedgerWorker } = await import('../../lib/worker.ts')
  return startLedgerWorker()
}

export type CheckState =
  | { is: 'idle' }
  | { is: 'running'; done: number; size: number | null }
  | { is: 'done'; report: LedgerReport }
  | { is: 'failed'; message: string }

/** One check at a time, in a worker of its own that ends with it or when the page is left. */
export function useLedgerCheck(startWorker: StartLedgerWorker) {
  const [state, setState] = useState<CheckState>({ is: 'idle' })
  const running = useRef<LedgerWorker | null>(null)
  // Counts the starts: what an earlier one still says is no longer heard.
  const turn = useRef(0)
  const end = () => {
    turn.current += 1
    running.current?.terminate()
    running.current = null
  }
  // biome-ignore lint/correctness/useExhaustiveDependencies: it only touches refs
  useEffect(() => end, [])
  const start = async (asked: ToLedgerWorker) => {
    end()
    const own = turn.current
    setState({ is: 'running', done: 0, size: null })
    try {
      const worker = await startWorker()
      if (own !== turn.current) {
        worker.terminate()
        return
      }
      running.current = worker
      worker.onmessage = ({ data }) => {
        if (own !== turn.current) return
        if (data.kind !== 'progress') end()
        setState(nextState(data))
      }
      worker.onerror = () => {
        if (own !== turn.current) return
        end()
        setState({ is: 'failed', message: 'The check broke off. Start it again.' })
      }
      worker.postMessage(asked)
    } catch {
      if (own === turn.current) setState({ is: 'failed', message: 'This browser did not start the check.' })
    }
  }
  const stop = () => {
    end()
    setState({ is: 'idle' })
  }
  return { state, start, stop }
}

function nextState(message: FromLedgerWorker): CheckState {
  if (message.kind === 'failed') return { is: 'failed', message: message.message }
  if (message.kind === 'done') return { is: 'done', report: message.report }
  return { is: 'running', done: message.done, size: message.size }
}

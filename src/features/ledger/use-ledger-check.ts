import { useState } from 'react'
import type { LedgerReport } from '../../../shared/ledger/check/check-ledger.ts'
import type { FromLedgerWorker, ToLedgerWorker } from '../../lib/ledger-messages.ts'
import { type OwnWorker, type StartWorker, useOneWorker } from '../../lib/use-one-worker.ts'

export type LedgerWorker = OwnWorker<ToLedgerWorker, FromLedgerWorker>
export type StartLedgerWorker = StartWorker<ToLedgerWorker, FromLedgerWorker>

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

/** One check at a time. */
export function useLedgerCheck(startWorker: StartLedgerWorker) {
  const [state, setState] = useState<CheckState>({ is: 'idle' })
  const worker = useOneWorker(startWorker)
  const start = (asked: ToLedgerWorker) => {
    setState({ is: 'running', done: 0, size: null })
    return worker.start(asked, {
      hear: (message) => setState(nextState(message)),
      fail: (why) => setState({ is: 'failed', message: sentences[why] }),
    })
  }
  const stop = () => {
    worker.end()
    setState({ is: 'idle' })
  }
  return { state, start, stop }
}

const sentences = {
  'broke-off': 'The check broke off. Start it again.',
  'did-not-start': 'This browser did not start the check.',
} as const

function nextState(message: FromLedgerWorker): CheckState {
  if (message.kind === 'failed') return { is: 'failed', message: message.message }
  if (message.kind === 'done') return { is: 'done', report: message.report }
  return { is: 'running', done: message.done, size: message.size }
}

import { useState } from 'react'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import type { YieldOptions } from '../../../shared/solver/yield/simulate.ts'
import type { YieldResult } from '../../../shared/solver/yield/types.ts'
import { type OwnWorker, type StartWorker, useOneWorker } from '../../lib/use-one-worker.ts'
import type { FromYieldWorker, ToYieldWorker } from '../../lib/yield-messages.ts'

export type YieldWorker = OwnWorker<ToYieldWorker, FromYieldWorker>
export type StartYieldWorker = StartWorker<ToYieldWorker, FromYieldWorker>

/** The worker and its address load with the first simulation. */
export const startBuiltWorker: StartYieldWorker = async () => {
  const { startYieldWorker } = await import('../../lib/worker.ts')
  return startYieldWorker()
}

export type YieldState =
  | { is: 'idle' }
  | { is: 'running'; done: number; trials: number; result: YieldResult | null }
  /** `design` is the one that was simulated: when the page's is another, the answer is of before the change. */
  | { is: 'done'; result: YieldResult; design: SizingDesign }
  | { is: 'failed'; message: string }

/** One simulation at a time. */
export function useYield(startWorker: StartYieldWorker) {
  const [state, setState] = useState<YieldState>({ is: 'idle' })
  const worker = useOneWorker(startWorker)
  const start = (design: SizingDesign, options: YieldOptions & { trials: number }) => {
    setState({ is: 'running', done: 0, trials: options.trials, result: null })
    return worker.start(
      { kind: 'start', design, options },
      {
        hear: (message) => setState(nextState(message, design)),
        fail: (why) => setState({ is: 'failed', message: sentences[why] }),
      },
    )
  }
  const stop = () => {
    if (worker.tell({ kind: 'stop' })) return
    // Still loading: nothing was simulated yet.
    worker.end()
    setState({ is: 'idle' })
  }
  return { state, start, stop }
}

const sentences = {
  'broke-off': 'The simulation broke off. Start it again.',
  'did-not-start': 'This browser did not start the simulation.',
} as const

function nextState(message: FromYieldWorker, design: SizingDesign): YieldState {
  if (message.kind === 'refused') return { is: 'failed', message: message.message }
  if (message.kind === 'done') return { is: 'done', result: message.result, design }
  return { is: 'running', done: message.done, trials: message.trials, result: message.result }
}

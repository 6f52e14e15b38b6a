import { useEffect, useRef, useState } from 'react'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import type { YieldOptions } from '../../../shared/solver/yield/simulate.ts'
import type { YieldResult } from '../../../shared/solver/yield/types.ts'
import type { FromYieldWorker, ToYieldWorker } from '../../lib/yield-messages.ts'

/** What of a Worker the panel uses; tests hand in one of their own. */
export type YieldWorker = {
  postMessage: (message: ToYieldWorker) => void
  terminate: () => void
  onmessage: ((event: MessageEvent<FromYieldWorker>) => void) | null
  onerror: ((event: ErrorEvent) => void) | null
}
export type StartWorker = () => YieldWorker | Promise<YieldWorker>

/** The worker and its address load with the first simulation. */
export const startBuiltWorker: StartWorker = async () => {
  const { startYieldWorker } = await import('../../lib/worker.ts')
  return startYieldWorker()
}

export type YieldState =
  | { is: 'idle' }
  | { is: 'running'; done: number; trials: number; result: YieldResult | null }
  /** `design` is the one that was simulated: when the page's is another, the answer is of before the change. */
  | { is: 'done'; result: YieldResult; design: SizingDesign }
  | { is: 'failed'; message: string }

/** One simulation at a time, in a worker of its own that ends with it. */
export function useYield(startWorker: StartWorker) {
  const [state, setState] = useState<YieldState>({ is: 'idle' })
  const running = useRef<YieldWorker | null>(null)
  // Counts the starts: what an earlier one still says is no longer heard.
  const turn = useRef(0)
  const end = () => {
    running.current?.terminate()
    running.current = null
  }
  useEffect(
    () => () => {
      turn.current += 1
      running.current?.terminate()
    },
    [],
  )
  const start = async (design: SizingDesign, options: YieldOptions & { trials: number }) => {
    end()
    turn.current += 1
    const own = turn.current
    setState({ is: 'running', done: 0, trials: options.trials, result: null })
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
        setState(nextState(data, design))
      }
      worker.onerror = () => {
        if (own !== turn.current) return
        end()
        setState({ is: 'failed', message: 'The simulation broke off. Start it again.' })
      }
      worker.postMessage({ kind: 'start', design, options })
    } catch {
      if (own === turn.current)
        setState({ is: 'failed', message: 'This browser did not start the simulation.' })
    }
  }
  const stop = () => {
    if (running.current) {
      running.current.postMessage({ kind: 'stop' })
      return
    }
    // Still loading: nothing was simulated yet.
    turn.current += 1
    setState({ is: 'idle' })
  }
  return { state, start, stop }
}

function nextState(message: FromYieldWorker, design: SizingDesign): YieldState {
  if (message.kind === 'refused') return { is: 'failed', message: message.message }
  if (message.kind === 'done') return { is: 'done', result: message.result, design }
  return { is: 'running', done: message.done, trials: message.trials, result: message.result }
}

import { isOgeeError } from '../../shared/errors.ts'
import { startYield, type YieldRun } from '../../shared/solver/yield/simulate.ts'
import type { FromYieldWorker, ToYieldWorker } from './yield-messages.ts'

/** Units between two looks at the messages: a few milliseconds, so that Stop is heard at once. */
const block = 1000
/** Pictures of the growing histogram in one run. */
const pictures = 25

/**
 * The worker's side: simulates block by block, listens between blocks, sends the picture so far.
 * @param send posts a message to the page
 * @param later runs a step after waiting messages were heard
 * @returns takes a message of the page
 */
export function yieldServer(
  send: (message: FromYieldWorker) => void,
  later: (step: () => void) => void,
): (message: ToYieldWorker) => void {
  let isStopped = false
  const work = (run: YieldRun, shown: number) => {
    if (isStopped && run.done > 0) {
      send({ kind: 'done', result: run.result() })
      return
    }
    if (run.step(block)) {
      send({ kind: 'done', result: run.result() })
      return
    }
    const { done, trials } = run
    const isDue = (done - shown) * pictures >= trials
    if (isDue) send({ kind: 'progress', done, trials, result: run.result() })
    later(() => work(run, isDue ? done : shown))
  }
  return (message) => {
    if (message.kind === 'stop') {
      isStopped = true
      return
    }
    try {
      work(startYield(message.design, message.options), 0)
    } catch (error) {
      if (!isOgeeError(error)) throw error
      send({ kind: 'refused', message: error.message })
    }
  }
}

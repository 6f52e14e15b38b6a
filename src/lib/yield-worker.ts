import { yieldServer } from './run-yield.ts'
import type { FromYieldWorker, ToYieldWorker } from './yield-messages.ts'

/** The worker's first and only file: the page's main thread never simulates. */
const serve = yieldServer(
  (message: FromYieldWorker) => postMessage(message),
  (step) => setTimeout(step, 0),
)

addEventListener('message', ({ data }: MessageEvent<ToYieldWorker>) => serve(data))

import './worker-zod.ts'
import type { FromLedgerWorker, ToLedgerWorker } from './ledger-messages.ts'
import { ledgerServer } from './run-ledger-check.ts'

/** The worker's first file: the page's main thread never hashes a whole ledger. */
const serve = ledgerServer(
  {
    fetch: (input, init) => fetch(input, { ...init, credentials: 'same-origin' }),
    baseUrl: '',
    headers: { 'x-ogee': '1' },
  },
  (message: FromLedgerWorker) => postMessage(message),
)

addEventListener('message', ({ data }: MessageEvent<ToLedgerWorker>) => {
  // A defect is thrown where the page hears of it.
  serve(data).catch((error: unknown) => setTimeout(() => Promise.reject(error)))
})

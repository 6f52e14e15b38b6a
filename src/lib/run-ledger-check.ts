import { type Caller, call, callPage } from '../../shared/call.ts'
import { isOgeeError } from '../../shared/errors.ts'
import { checkLedger } from '../../shared/ledger/check/check-ledger.ts'
import { serverSource } from '../../shared/ledger/check/server-source.ts'
import type { SignatureTask } from '../../shared/ledger/check/signed-in-receipt.ts'
import { parseVerifierKey } from '../../shared/ledger/checkpoint.ts'
import { NoSignatures, withCrypto } from './ledger-crypto.ts'
import type { FromLedgerWorker, ToLedgerWorker } from './ledger-messages.ts'
import { sha256 } from './sha256.ts'

/**
 * The worker's side: reads the ledger from the server and checks all of it here.
 *
 * @param caller how the server is reached
 * @param send posts a message to the page
 * @returns takes the page's one message; resolves when the last answer is posted
 */
export function ledgerServer(
  caller: Caller,
  send: (message: FromLedgerWorker) => void,
): (message: ToLedgerWorker) => Promise<void> {
  const source = serverSource({
    call: (endpoint, input) => call(caller, endpoint, input),
    page: (endpoint, input) => callPage(caller, endpoint, input),
  })
  return async ({ key: text, kept }) => {
    const key = parseVerifierKey(sha256, text)
    if (!key) {
      send({ kind: 'failed', message: 'The public key cannot be read.' })
      return
    }
    try {
      const report = await checkLedger(source, {
        sha256,
        asText: (bytes) => oneEach.decode(bytes),
        run: withCrypto,
        key,
        kept,
        verifyAll,
        onProgress: (done, size) => send({ kind: 'progress', done, size }),
        turn: () => new Promise((resolve) => setTimeout(resolve)),
      })
      send({ kind: 'done', report })
    } catch (error) {
      if (!isOgeeError(error) && !(error instanceof NoSignatures)) throw error
      send({ kind: 'failed', message: error.message })
    }
  }
}

/** Its name for a set that has a character for every byte. */
const oneEach = new TextDecoder('latin1')

const verifyAll = (tasks: readonly SignatureTask[]) =>
  withCrypto(({ verify }) =>
    tasks.map(({ publicKey, bytes, signature }) => verify(publicKey, bytes, signature)),
  )

import { isOgeeError } from '../../shared/errors.ts'
import { synthesiseNetwork } from '../../shared/solver/network-synthesis/synthesise.ts'
import type { FromNetworkWorker, ToNetworkWorker } from './network-messages.ts'

/** Values out of a series, or why none can be looked for: in the page for two resistors, in a worker for three. */
export function findNetwork({ design, which, request }: ToNetworkWorker): FromNetworkWorker {
  try {
    return { result: synthesiseNetwork(design, which, request) }
  } catch (error) {
    if (isOgeeError(error)) return { refusal: error.message }
    throw error
  }
}

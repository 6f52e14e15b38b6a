import { callBatch } from '../../../../shared/call-batch.ts'
import type { BatchOutcome } from '../../../../shared/contract/batches.ts'
import { errorTable, isOgeeError, OgeeError } from '../../../../shared/errors.ts'
import { caller } from '../../../lib/api.ts'
import type { Ready } from './plan.ts'

/** Lines of one request: few enough that the page moves, enough that the way there does not count. */
export const blockLines = 100

/**
 * Sends a block of measurements and gives the outcomes, in order. After any error the block can be sent again: nothing is doubled.
 * @throws answer-cut, when the answer ended early; what a line was refused for, when that says nothing about the measurement;
 *   the server's own refusal of the whole; server-unreachable
 */
export async function sendBlock(block: readonly Ready[], signal: AbortSignal): Promise<BatchOutcome[]> {
  const lines = block.map(({ key, body }) => `${JSON.stringify({ ...body, key })}\n`).join('')
  const outcomes: BatchOutcome[] = []
  try {
    for await (const outcome of callBatch({ ...caller, signal }, lines)) outcomes.push(outcome)
  } catch (cause) {
    if (signal.aborted || isOgeeError(cause)) throw cause
    throw new OgeeError('answer-cut', 'The answer was cut on its way.', { cause })
  }
  for (const outcome of outcomes) {
    if (!('record' in outcome) && isUnanswered(outcome)) throw refusalOf(outcome)
  }
  return outcomes
}

type Refused = Extract<BatchOutcome, { problem: unknown }>

/** The server could not see to the line, or no longer knows who sends it: that is no answer to the measurement. */
const isUnanswered = ({ status, problem: { code } }: Refused) => status === 401 || errorTable[code].retry

function refusalOf({ problem: { code, detail, errors, facts } }: Refused): OgeeError {
  return new OgeeError(code, detail, { ...(errors ? { errors } : {}), ...(facts ? { facts } : {}) })
}

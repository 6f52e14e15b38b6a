import { type BatchOutcome, batchAnswer } from '../../../../shared/contract/batches.ts'
import { problem } from '../../../../shared/contract/problem.ts'
import { OgeeError } from '../../../../shared/errors.ts'
import { caller } from '../../../lib/api.ts'
import type { Ready } from './plan.ts'

/** Lines of one request: few enough that the page moves, enough that the way there does not count. */
export const blockLines = 100

/**
 * Sends a block of measurements and gives the outcomes as they come, in order.
 * @throws answer-cut, when the answer ended early: sending the block again doubles nothing; the server's own refusal of the
 *   whole; server-unreachable
 */
export async function sendBlock(
  block: readonly Ready[],
  signal: AbortSignal,
  onOutcome: (outcome: BatchOutcome) => void,
): Promise<void> {
  const body = block.map(({ key, body }) => `${JSON.stringify({ ...body, key })}\n`).join('')
  const headers = { ...caller.headers, 'content-type': 'application/x-ndjson' }
  const response = await fetchOr(body, headers, signal)
  if (!response.ok || !response.body) throw await refusalOf(response)
  let ended = false
  for await (const line of linesOf(response.body, signal)) {
    const answer = batchAnswer.parse(JSON.parse(line))
    if ('end' in answer) ended = true
    else onOutcome(answer)
  }
  if (!ended) throw cut()
}

async function fetchOr(
  body: string,
  headers: Record<string, string>,
  signal: AbortSignal,
): Promise<Response> {
  try {
    return await caller.fetch('/api/v1/batches', { method: 'POST', headers, body, signal })
  } catch (cause) {
    if (signal.aborted) throw cause
    throw new OgeeError('server-unreachable', 'The server does not answer.', { cause })
  }
}

async function refusalOf(response: Response): Promise<OgeeError> {
  const parsed = problem.safeParse(await response.json().catch(() => null))
  if (!parsed.success) return cut()
  const { code, detail, errors, facts } = parsed.data
  return new OgeeError(code, detail, { ...(errors ? { errors } : {}), ...(facts ? { facts } : {}) })
}

const cut = () => new OgeeError('answer-cut', 'The answer was cut on its way.')

async function* linesOf(body: ReadableStream<Uint8Array>, signal: AbortSignal): AsyncGenerator<string> {
  const reader = body.getReader()
  const decoder = new TextDecoder()
  let rest = ''
  for (;;) {
    const { done, value } = await reader.read().catch((cause: unknown) => {
      if (signal.aborted) throw cause
      throw cut()
    })
    rest += decoder.decode(value, { stream: !done })
    const lines = rest.split('\n')
    rest = lines.pop() ?? ''
    for (const line of lines) if (line !== '') yield line
    if (done) return
  }
}

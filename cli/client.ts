import { type Caller, call, callPage } from '../shared/call.ts'
import { callBatch } from '../shared/call-batch.ts'
import type { BatchOutcome } from '../shared/contract/batches.ts'
import type { Endpoint, InputOf, ReplyOf } from '../shared/contract/endpoint.ts'
import { errorTable, OgeeError } from '../shared/errors.ts'
import type { Connection } from './config.ts'
import type { Io } from './io.ts'
import { version } from './version.ts'

/** How patient a client is. Tests have less time. */
export type Patience = { tries: number; firstWaitMs: number; waitInAllMs: number; answerMs: number }
export const usualPatience: Patience = { tries: 6, firstWaitMs: 250, waitInAllMs: 60_000, answerMs: 15_000 }

export type Client = {
  url: string
  /** Calls an endpoint, again where that can help. Safe: what writes carries the same idempotency key each time. */
  call: <E extends Endpoint>(endpoint: E, input: InputOf<E>) => Promise<ReplyOf<E>>
  /** Calls an endpoint that answers lines, and gives their bytes once all have come. */
  page: <E extends Endpoint>(endpoint: E, input: InputOf<E>) => Promise<Uint8Array>
  /** Posts a block of a batch, the whole again when its answer was cut: what was recorded is told once more. */
  sendBlock: (block: string) => Promise<BatchOutcome[]>
}

/** What is known of the last answer, beside its body. */
type Seen = { reached: boolean; status: number | undefined; retryAfterMs: number | undefined }

export function makeClient(
  { url, token }: Connection,
  io: Io,
  patience = usualPatience,
  fetch = globalThis.fetch,
): Client {
  return {
    url,
    call: <E extends Endpoint>(endpoint: E, input: InputOf<E>) =>
      patiently<ReplyOf<E>>((caller) => call(caller, endpoint, input)),
    page: (endpoint, input) => patiently((caller) => callPage(caller, endpoint, input)),
    sendBlock: (block) => patiently((caller, heard) => outcomesOf(caller, block, heard)),
  }

  async function patiently<T>(ask: Ask<T>): Promise<T> {
    const seen: Seen = { reached: false, status: undefined, retryAfterMs: undefined }
    let waitedMs = 0
    for (let attempt = 1; ; attempt += 1) {
      const trouble = await once(ask, seen).catch((error: unknown) => troubleOf(error, seen))
      if (!(trouble instanceof OgeeError)) return trouble
      const waitMs = seen.retryAfterMs ?? backoff(patience.firstWaitMs, attempt)
      const again =
        errorTable[trouble.code].retry &&
        attempt < patience.tries &&
        waitedMs + waitMs <= patience.waitInAllMs
      if (!again) throw settled(trouble, seen)
      if (io.stderrIsTerminal) io.say(`ogee: ${trouble.message} Again in ${(waitMs / 1000).toFixed(1)} s.`)
      await new Promise((resolve) => setTimeout(resolve, waitMs))
      waitedMs += waitMs
    }
  }

  async function once<T>(ask: Ask<T>, seen: Seen): Promise<T> {
    seen.status = undefined
    seen.retryAfterMs = undefined
    // A timer of our own keeps the process waiting; AbortSignal.timeout lets it end in the middle, as 13.
    const silence = new AbortController()
    const tooLong = setTimeout(() => silence.abort(new Error('no answer in time')), patience.answerMs)
    const caller = {
      baseUrl: url,
      headers: {
        ...(token === null ? {} : { authorization: `Bearer ${token}` }),
        'user-agent': `ogee/${version}`,
      },
      fetch: (target: string | URL | Request, init?: RequestInit) =>
        watched(fetch, target, { ...init, signal: silence.signal }, seen, io),
    }
    try {
      return await ask(caller, () => tooLong.refresh())
    } finally {
      clearTimeout(tooLong)
    }
  }
}

/** One try; `heard` is told of each sign of life, so that a long answer may take long. */
type Ask<T> = (caller: Caller, heard: () => void) => Promise<T>

async function outcomesOf(caller: Caller, block: string, heard: () => void): Promise<BatchOutcome[]> {
  const outcomes: BatchOutcome[] = []
  for await (const outcome of callBatch(caller, block)) {
    outcomes.push(outcome)
    heard()
  }
  return outcomes
}

/** Fetches without following redirects: a token must not be carried to wherever an answer points. */
async function watched(
  fetch: typeof globalThis.fetch,
  target: string | URL | Request,
  init: RequestInit,
  seen: Seen,
  io: Io,
): Promise<Response> {
  const response = await fetch(target, { ...init, redirect: 'manual' })
  seen.reached = true
  seen.status = response.status
  seen.retryAfterMs = retryAfter(response.headers.get('retry-after'), io.now())
  if (response.status >= 300 && response.status < 400) {
    const to = response.headers.get('location') ?? 'elsewhere'
    throw new OgeeError(
      'configuration',
      `The server sends us on to ${to}. A token does not follow; name the right server in OGEE_URL.`,
    )
  }
  return response
}

/** Seconds or a date (RFC 9110, 10.2.3). */
function retryAfter(header: string | null, nowMs: number): number | undefined {
  if (header === null || header === '') return undefined
  const ms = /^\d+$/.test(header) ? Number(header) * 1000 : Date.parse(header) - nowMs
  return Number.isFinite(ms) ? Math.max(0, ms) : undefined
}

const backoff = (firstMs: number, attempt: number) =>
  firstMs * 2 ** (attempt - 1) * (0.75 + Math.random() / 2)

/** What went wrong in one try, told apart by whether the server was there. */
function troubleOf(error: unknown, seen: Seen): OgeeError {
  if (error instanceof OgeeError) {
    if (error.cause instanceof OgeeError) return error.cause
    if (seen.status === 429 && error.code === 'defect')
      return new OgeeError('too-many-requests', error.message)
    if (seen.status === 503 && error.code === 'server-unreachable')
      return new OgeeError('not-ready', error.message)
    return error
  }
  // The head of an answer came and its body did not, or was no JSON: cut on the way.
  return new OgeeError('answer-cut', 'The answer of the server was cut.', { cause: error })
}

/** Out of patience: 75 when the server was there in some try, 69 when it never was. */
function settled(trouble: OgeeError, seen: Seen): OgeeError {
  if (trouble.code !== 'server-unreachable' || !seen.reached) return trouble
  return new OgeeError('answer-cut', 'The server stopped answering.', { cause: trouble })
}

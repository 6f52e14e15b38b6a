import { type Caller, call, openStream } from '../../shared/call.ts'
import type { Endpoint, InputOf, ReplyOf } from '../../shared/contract/endpoint.ts'
import { isOgeeError } from '../../shared/errors.ts'
import { setConnection } from './connection.ts'

/** The session cookie goes along; the header proves that the request comes from this page and not from another site. */
export const caller: Caller = {
  fetch: (input, init) => globalThis.fetch(input, { ...init, credentials: 'same-origin' }),
  baseUrl: '',
  headers: { 'x-ogee': '1' },
}

/**
 * Every request of the browser. Beside its answer it tells the frame whether the server answers and whether the
 * session still stands, so that no screen has to.
 */
export async function api<E extends Endpoint>(
  endpoint: E,
  input: InputOf<E>,
  signal?: AbortSignal,
): Promise<ReplyOf<E>> {
  try {
    const reply = await call(signal ? { ...caller, signal } : caller, endpoint, input)
    setConnection({ outage: null })
    return reply
  } catch (error) {
    note(error)
    throw error
  }
}

/** For what is read while it comes; refusals and outages are noted in the same way. */
export async function apiStream(path: string, signal: AbortSignal): Promise<Response> {
  try {
    return await openStream({ ...caller, signal }, path)
  } catch (error) {
    note(error)
    throw error
  }
}

function note(error: unknown): void {
  if (!isOgeeError(error)) return
  const outage = isOgeeError(error, 'server-unreachable') || isOgeeError(error, 'database-unavailable')
  setConnection({ outage: outage ? error.message : null })
  if (isOgeeError(error, 'sign-in-required')) setConnection({ sessionEnded: true })
}

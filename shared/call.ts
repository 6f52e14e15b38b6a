import type { Endpoint, InputOf, ReplyOf } from './contract/endpoint.ts'
import { problem } from './contract/problem.ts'
import { OgeeError } from './errors.ts'

/** How requests leave: the browser passes its fetch and a same-origin base, the command line a token. */
export type Caller = {
  fetch: typeof fetch
  /** Origin of the server, without a slash at the end; empty in the browser. */
  baseUrl: string
  headers?: Readonly<Record<string, string>>
  signal?: AbortSignal
}

type AnyInput = {
  params?: Record<string, unknown>
  query?: Record<string, unknown>
  body?: unknown
  idempotencyKey?: string
  ifMatch?: string
}

/**
 * Executes an endpoint description and gives its reply, or throws the OgeeError that the server meant.
 * The reply keeps keys that this version does not know. A server that cannot be reached is `server-unreachable`.
 */
export async function call<E extends Endpoint>(
  caller: Caller,
  endpoint: E,
  input: InputOf<E>,
): Promise<ReplyOf<E>> {
  const request = input as AnyInput
  const response = await send(caller, endpoint, request)
  if (!response.ok) throw await problemOf(response)
  if (endpoint.reply.status === 204) return null as ReplyOf<E>
  const reply: unknown = endpoint.reply.mediaType?.startsWith('text/')
    ? await response.text()
    : await response.json()
  const checked = endpoint.reply.schema.safeParse(reply)
  if (!checked.success) {
    const where = checked.error.issues.map((issue) => `/${issue.path.join('/')}`).slice(0, 3)
    throw new OgeeError(
      'defect',
      `The answer of ${endpoint.method} ${endpoint.path} is not as agreed at ${where.join(', ')}.`,
    )
  }
  return reply as ReplyOf<E>
}

/** A reply that is read while it comes, such as an export: the response as it is, or the OgeeError that the server meant. */
export async function openStream(caller: Caller, path: string): Promise<Response> {
  const response = await reach(caller, path, { method: 'GET', headers: { ...caller.headers } })
  if (!response.ok) throw await problemOf(response)
  return response
}

/**
 * Executes an endpoint that answers lines, and gives their bytes, line ends included, once all have come.
 * Throws as `call`; an answer that was cut fails as the connection does.
 */
export async function callPage<E extends Endpoint>(
  caller: Caller,
  endpoint: E,
  input: InputOf<E>,
): Promise<Uint8Array> {
  const response = await send(caller, endpoint, input as AnyInput)
  if (!response.ok) throw await problemOf(response)
  return new Uint8Array(await response.arrayBuffer())
}

async function send(caller: Caller, endpoint: Endpoint, request: AnyInput): Promise<Response> {
  const mediaType = endpoint.ndjson ? 'application/x-ndjson' : 'application/json'
  const headers: Record<string, string> = { accept: mediaType, ...caller.headers }
  if (request.body !== undefined) headers['content-type'] = mediaType
  if (request.idempotencyKey !== undefined) headers['idempotency-key'] = request.idempotencyKey
  if (request.ifMatch !== undefined) headers['if-match'] = request.ifMatch
  return await reach(caller, pathOf(endpoint, request), {
    method: endpoint.method,
    headers,
    ...(request.body === undefined ? {} : { body: bodyText(endpoint, request.body) }),
  })
}

async function reach(caller: Caller, path: string, init: RequestInit): Promise<Response> {
  try {
    return await caller.fetch(`${caller.baseUrl}/api/v1${path}`, {
      ...init,
      ...(caller.signal ? { signal: caller.signal } : {}),
    })
  } catch (cause) {
    if (caller.signal?.aborted) throw cause
    throw new OgeeError('server-unreachable', 'The server does not answer.', { cause })
  }
}

/** A block of NDJSON is a text already. */
const bodyText = ({ ndjson }: Endpoint, body: unknown) => (ndjson ? String(body) : JSON.stringify(body))

/**
 * Posts a block of NDJSON and gives the lines of the answer as they come, whole ones only: what was cut in the middle of a
 * line is left out. @throws as `call`; whatever fetch throws when the answer breaks off
 */
export async function* callLines(caller: Caller, endpoint: Endpoint, block: string): AsyncGenerator<string> {
  const response = await send(caller, endpoint, { body: block })
  if (!response.ok) throw await problemOf(response)
  const decoder = new TextDecoder()
  let rest = ''
  const reader = response.body?.getReader()
  for (let read = await reader?.read(); read && !read.done; read = await reader?.read()) {
    const lines = (rest + decoder.decode(read.value, { stream: true })).split('\n')
    rest = lines.pop() ?? ''
    yield* lines
  }
}

/** Fills `:name` parts and appends the query. Values are escaped; absent ones are left out. */
export function pathOf(endpoint: Endpoint, request: Pick<AnyInput, 'params' | 'query'>): string {
  const path = endpoint.path.replaceAll(/:(\w+)/g, (_, name: string) =>
    encodeURIComponent(String(request.params?.[name])),
  )
  const query = new URLSearchParams()
  for (const [name, value] of Object.entries(request.query ?? {})) {
    if (value !== undefined) query.set(name, String(value))
  }
  const text = query.toString()
  return text === '' ? path : `${path}?${text}`
}

async function problemOf(response: Response): Promise<OgeeError> {
  const parsed = problem.safeParse(await response.json().catch(() => null))
  if (!parsed.success) {
    const gone = response.status === 502 || response.status === 503 || response.status === 504
    return new OgeeError(
      gone ? 'server-unreachable' : 'defect',
      `The server answered ${response.status} in a form that is not ours.`,
    )
  }
  const { code, detail, errors, facts, instance } = parsed.data
  return new OgeeError(code, detail, {
    ...(errors ? { errors } : {}),
    facts: { ...facts, ...(instance === undefined ? {} : { instance }), ...retryAfter(response) },
  })
}

function retryAfter(response: Response): { retryAfterSeconds: number } | undefined {
  const seconds = Number(response.headers.get('retry-after') ?? Number.NaN)
  return Number.isFinite(seconds) ? { retryAfterSeconds: seconds } : undefined
}

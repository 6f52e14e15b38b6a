import type { Request, RequestHandler, Response, Router } from 'express'
import type * as z from 'zod'
import type { Endpoint } from '../../shared/contract/endpoint.ts'
import { isOgeeError, OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import { requireAccess } from '../policies/access.ts'
import { requireSameSite } from './cross-site.ts'
import { within } from './deadline.ts'
import type { Deps } from './deps.ts'
import { fileName } from './file-name.ts'
import { jsonBody, ndjsonBody } from './json-body.ts'
import { localsOf } from './locals.ts'
import { nameAdministrators } from './name-administrators.ts'
import type { Principal } from './principal.ts'
import { validate } from './validate.ts'

type Output<Schema> = [Exclude<Schema, undefined>] extends [never]
  ? undefined
  : Exclude<Schema, undefined> extends z.ZodType
    ? z.output<Exclude<Schema, undefined>>
    : undefined

/** What a handler gets: everything checked. */
export type Input<E extends Endpoint> = {
  /** Asking for it where nobody need be signed in is a defect. */
  readonly principal: Principal
  params: Output<E['params']>
  query: Output<E['query']>
  body: Output<E['body']>
  /** The body as it was sent, before defaults: what hashes and exact bytes are made from. */
  rawBody: unknown
  idempotencyKey: string
  /** What the caller says that it saw; empty where nobody asks. */
  ifMatch: string
  request: Request
  response: Response
}

/** A reply whose JSON text exists already. */
export class ReadyJson {
  readonly text: string
  constructor(text: string) {
    this.text = text
  }
}

/** A reply that is a file: its bytes and the name to keep it under. */
export class ReadyFile {
  readonly bytes: Buffer
  readonly name: string
  constructor(bytes: Buffer, name: string) {
    this.bytes = bytes
    this.name = name
  }
}

/** A reply of lines that are made while they are sent, some at a time. */
export class ReadyLines {
  /** Some lines; or a block of bytes of whole lines, their line ends included. */
  readonly lines: AsyncIterable<readonly string[] | Uint8Array>
  constructor(lines: AsyncIterable<readonly string[] | Uint8Array>) {
    this.lines = lines
  }
}

export type Handler<E extends Endpoint> = (
  input: Input<E>,
) => Promise<z.input<E['reply']['schema']> | ReadyJson | ReadyLines | ReadyFile>

/** Registers routes from their descriptions; there is no other way to register one. */
export type Serve = <E extends Endpoint>(endpoint: E, handler: Handler<E>) => void

export type Gates = {
  identify: RequestHandler
  throttleToken: RequestHandler
  throttleSignIn: RequestHandler
  limitBatches: RequestHandler
}

export function createServe(router: Router, deps: Deps, gates: Gates): Serve {
  return (endpoint, handler) => {
    const verb = endpoint.method.toLowerCase() as 'get' | 'post' | 'put' | 'patch' | 'delete'
    router[verb](
      endpoint.path,
      ...(needsIdentity(endpoint) ? [gates.identify, gates.throttleToken] : []),
      guard(endpoint, deps),
      ...bodyReaders(endpoint, gates),
      ...(endpoint.id === 'signIn' ? [gates.throttleSignIn] : []),
      async (request, response) => {
        const work = handler(inputOf(endpoint, request, response))
        const reply = await (takesPassword.has(endpoint.id) ? work : within(work))
        if (reply instanceof ReadyLines)
          await sendLines(response, endpoint, reply, deps.checkReplies ?? false)
        else if (reply instanceof ReadyFile) sendFile(response, endpoint, reply)
        else send(response, endpoint, reply, deps.checkReplies ?? false)
      },
    )
  }
}

function bodyReaders(endpoint: Endpoint, gates: Gates): RequestHandler[] {
  if (!endpoint.body) return []
  return endpoint.ndjson ? [gates.limitBatches, ndjsonBody] : [jsonBody]
}

/** Hashing waits its turn by design, so these bound their use of the database themselves. */
const takesPassword = new Set(['signIn', 'setUp'])

/** People may look around while the ledger contradicts itself, or is signed by a key that is not here; nothing is written. */
const aboutSessions = new Set(['signIn', 'signOut'])

/** Open reads answer whoever asks, whatever they send along; open writes deal with the session. */
const needsIdentity = (endpoint: Endpoint) => endpoint.access !== 'open' || isUnsafe(endpoint)
const isUnsafe = (endpoint: Endpoint) => endpoint.method !== 'GET'

function guard(endpoint: Endpoint, deps: Deps): RequestHandler {
  return (request, response, next) => {
    const { principal } = localsOf(response)
    // Access first: who is not signed in hears that, and not how to prove where the request came from.
    try {
      requireAccess(endpoint.access, principal)
    } catch (refusal) {
      if (!isOgeeError(refusal, 'forbidden')) throw refusal
      within(nameAdministrators(deps.database, refusal)).then(next, next)
      return
    }
    if (isUnsafe(endpoint) && principal?.kind !== 'token') requireSameSite(request, deps.config.baseUrl)
    const fault = deps.historyFault ?? deps.signer.fault
    if (isUnsafe(endpoint) && fault && !aboutSessions.has(endpoint.id)) {
      throw new OgeeError('not-ready', fault)
    }
    next()
  }
}

function inputOf<E extends Endpoint>(endpoint: E, request: Request, response: Response): Input<E> {
  const { params, query, body } = endpoint
  const rawBody: unknown = request.body
  return {
    get principal() {
      const { principal } = localsOf(response)
      if (!principal) throw new Error(`${endpoint.id} asks who calls, but lets everybody in.`)
      return principal
    },
    params: (params ? validate(params, request.params, 'path') : undefined) as Output<E['params']>,
    query: (query ? validate(query, request.query, 'query') : undefined) as Output<E['query']>,
    // Lines of NDJSON are checked one by one: a bad one is no reason to refuse the others.
    body: (body && !endpoint.ndjson ? validate(body, rawBody, 'body') : undefined) as Output<E['body']>,
    rawBody,
    idempotencyKey: endpoint.idempotent ? idempotencyKeyOf(request) : '',
    ifMatch: endpoint.conditional ? ifMatchOf(request) : '',
    request,
    response,
  }
}

function idempotencyKeyOf(request: Request): string {
  const key = request.get('idempotency-key')
  if (key === undefined || key === '') {
    throw new OgeeError(
      'idempotency-key-missing',
      'Send a header Idempotency-Key, so that a retry doubles nothing.',
    )
  }
  if (key.length > limits.idempotencyKeyMax || !/^[\x21-\x7e]+$/.test(key)) {
    throw new OgeeError(
      'invalid-request',
      `The Idempotency-Key must have 1 to ${limits.idempotencyKeyMax} printable ASCII characters without spaces.`,
      { errors: [{ path: 'Idempotency-Key', message: 'Use printable ASCII without spaces.' }] },
    )
  }
  return key
}

function ifMatchOf(request: Request): string {
  const etag = request.get('if-match')
  if (etag !== undefined && etag !== '') return etag
  throw new OgeeError(
    'precondition-required',
    'Send a header If-Match with the etag of what you saw, so that nobody else’s change is lost.',
  )
}

/** Waits for a slow reader, and stops making lines once the reader has gone. */
async function sendLines(
  response: Response,
  endpoint: Endpoint,
  { lines }: ReadyLines,
  check: boolean,
): Promise<void> {
  response.statusCode = endpoint.reply.status
  response.setHeader('Cache-Control', 'no-store')
  const type = endpoint.ndjson ? 'application/x-ndjson' : endpoint.reply.mediaType
  response.setHeader('Content-Type', `${type}; charset=utf-8`)
  for await (const some of lines) {
    if (some.length === 0) continue
    const block = some instanceof Uint8Array ? some : `${some.join('\n')}\n`
    if (check && endpoint.ndjson) {
      for (const line of block.toString().trimEnd().split('\n')) requireAsAgreed(endpoint, JSON.parse(line))
    }
    if (response.closed) return
    if (!response.write(block)) await drained(response)
  }
  response.end()
}

function sendFile(response: Response, { reply }: Endpoint, { bytes, name }: ReadyFile): void {
  response.statusCode = reply.status
  response.setHeader('Cache-Control', 'no-store')
  response.setHeader('Content-Type', reply.mediaType ?? 'application/octet-stream')
  response.setHeader('Content-Disposition', fileName(name))
  response.setHeader('Content-Length', bytes.length)
  response.end(bytes)
}

function drained(response: Response): Promise<void> {
  return new Promise((resolve) => {
    const done = () => {
      response.off('drain', done).off('close', done)
      resolve()
    }
    response.on('drain', done).on('close', done)
  })
}

function requireAsAgreed({ id, reply }: Endpoint, value: unknown): void {
  const checked = reply.schema.safeParse(value)
  if (!checked.success) throw new Error(`The reply of ${id} breaks its schema: ${checked.error.message}`)
}

function send(response: Response, endpoint: Endpoint, reply: unknown, check: boolean): void {
  const { status, mediaType } = endpoint.reply
  if (check) requireAsAgreed(endpoint, reply instanceof ReadyJson ? JSON.parse(reply.text) : reply)
  response.statusCode = status
  response.setHeader('Cache-Control', 'no-store')
  if (status === 204) {
    response.end()
    return
  }
  const isText = mediaType === 'text/plain'
  const text = isText ? String(reply) : reply instanceof ReadyJson ? reply.text : JSON.stringify(reply)
  const bytes = Buffer.from(text)
  response.setHeader('Content-Type', `${isText ? 'text/plain' : 'application/json'}; charset=utf-8`)
  response.setHeader('Content-Length', bytes.length)
  response.end(bytes)
}

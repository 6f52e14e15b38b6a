import type { ErrorRequestHandler, Request, Response } from 'express'
import type { Problem } from '../../shared/contract/problem.ts'
import { errorTable, isOgeeError, OgeeError } from '../../shared/errors.ts'
import { asOutage, failureOf } from '../db/failure.ts'
import { localsOf } from './locals.ts'

/** The one place where errors become replies: RFC 9457 problem details, and the challenges of RFC 6750. */
export const problemHandler: ErrorRequestHandler = (error: unknown, request, response, next) => {
  const known = asKnown(error)
  const locals = localsOf(response)
  locals.problem = known.code
  if (known.status >= 500) locals.failure = error
  if (response.headersSent) {
    // Too late for a reply; the connection is cut so that nobody takes the half for the whole.
    next(error)
    return
  }
  replyProblem(request, response, known)
}

export function replyProblem(request: Request, response: Response, error: OgeeError): void {
  const challenge = challengeOf(error, localsOf(response).principal?.kind === 'token')
  if (challenge !== null) response.set('WWW-Authenticate', challenge)
  const { retryAfterSeconds } = error.facts
  if (typeof retryAfterSeconds === 'number') response.set('Retry-After', String(retryAfterSeconds))
  response.status(error.status)
  response.set('Content-Type', 'application/problem+json; charset=utf-8')
  response.set('Cache-Control', 'no-store')
  response.end(
    request.method === 'HEAD' ? undefined : JSON.stringify(problemOf(error, localsOf(response).id)),
  )
}

export function problemOf(error: OgeeError, requestId: string): Problem {
  return {
    type: `/problems/${error.code}`,
    title: errorTable[error.code].title,
    status: error.status,
    detail: error.message,
    code: error.code,
    instance: `urn:uuid:${requestId}`,
    ...(error.errors.length > 0 ? { errors: error.errors.map((field) => ({ ...field })) } : {}),
    ...(Object.keys(error.facts).length > 0 ? { facts: { ...error.facts } } : {}),
  }
}

/** RFC 6750 section 3: nothing but the realm when nothing was sent, the error code when something was wrong with it. */
function challengeOf(error: OgeeError, byToken: boolean): string | null {
  const bare = 'Bearer realm="ogee"'
  if (error.code === 'token-invalid') return `${bare}, error="invalid_token"`
  if (error.code === 'token-malformed') return `${bare}, error="invalid_request"`
  if (error.code === 'insufficient-scope' || (byToken && error.status === 403)) {
    const { scope } = error.facts
    const needed = typeof scope === 'string' && scope !== '' ? `, scope="${scope}"` : ''
    return `${bare}, error="insufficient_scope"${needed}`
  }
  return error.status === 401 ? bare : null
}

/** Any error as one of the table: what nobody foresaw is a defect without words of its own. */
export function asKnown(error: unknown): OgeeError {
  if (isOgeeError(error)) return error
  const outage = asOutage(error)
  if (isOgeeError(outage)) return outage
  if (failureOf(error) === 'duplicate') {
    return new OgeeError('already-exists', 'That name is taken.', { cause: error })
  }
  return (
    asBodyTrouble(error) ??
    new OgeeError('defect', 'Something is broken on our side. The request id helps us find it.', {
      cause: error,
    })
  )
}

/** What Express and its JSON parser refuse by themselves. */
function asBodyTrouble(error: unknown): OgeeError | null {
  const { type, status, limit } = error as { type?: unknown; status?: unknown; limit?: unknown }
  switch (type) {
    case 'entity.too.large':
      return new OgeeError(
        'body-too-large',
        `The body is larger than ${Number(limit) / 1024 / 1024} MiB. Send less at once.`,
      )
    case 'entity.parse.failed':
    case 'request.size.invalid':
    case 'request.aborted':
      return new OgeeError('malformed-json', 'The body is not JSON.')
    case 'encoding.unsupported':
    case 'charset.unsupported':
      return new OgeeError('unsupported-media-type', 'Send the body as plain UTF-8 JSON, not compressed.')
    default:
      return status === 400
        ? new OgeeError('bad-framing', 'The address of the request cannot be read.')
        : null
  }
}

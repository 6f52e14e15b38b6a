import type { RequestHandler, Response } from 'express'
import type { Logger } from 'pino'
import { pinoHttp } from 'pino-http'
import { v7 as uuid } from 'uuid'
import { localsOf } from './locals.ts'

/**
 * One line a request: id, method, path, status, who, and the code of a refusal. Never a query, a header, a cookie or a
 * body: secrets travel there. Paths hold no secrets.
 */
export function requestLog(logger: Logger): RequestHandler[] {
  const log = pinoHttp<Parameters<RequestHandler>[0], Response>({
    logger,
    genReqId: (_, response) => localsOf(response).id,
    customLogLevel: (_, response) => levelOf(response.statusCode),
    customSuccessMessage: () => 'request',
    customErrorMessage: () => 'request',
    customSuccessObject: (_, response, values: object) => ({ ...values, ...facts(response) }),
    customErrorObject: (_, response, __, values: object) => ({ ...values, ...facts(response) }),
    serializers: {
      req: (request: { method: string; url: string; remoteAddress: string }) => ({
        method: request.method,
        path: request.url.split('?')[0],
      }),
      res: (response: { statusCode: number }) => ({ status: response.statusCode }),
      err: errorFacts,
    },
  })
  return [
    (_, response, next) => {
      const id = uuid()
      Object.assign(response.locals, { id, principal: null })
      response.set('X-Request-Id', id)
      next()
    },
    log,
  ]
}

function facts(response: Response): object {
  const { principal, problem, failure, id } = localsOf(response)
  return {
    request: id,
    address: response.req.ip,
    by: principal === null ? null : `${principal.kind}:${principal.id}`,
    ...(problem === undefined ? {} : { problem }),
    ...(failure === undefined ? {} : { cause: errorFacts(failure) }),
  }
}

function levelOf(status: number): 'info' | 'warn' | 'error' {
  if (status >= 500) return 'error'
  return status === 401 || status === 403 || status === 429 ? 'warn' : 'info'
}

/** What of an error may be logged: never its SQL or parameters, which hold what people typed. */
export function errorFacts(error: unknown): object {
  if (!(error instanceof Error)) return { message: String(error) }
  const { errno, code } = (error as { parent?: { errno?: unknown; code?: unknown } }).parent ?? {}
  const cause = error.cause === undefined ? {} : { cause: errorFacts(error.cause) }
  return {
    name: error.name,
    message: error.message.split('\nsql:')[0],
    ...(errno === undefined ? {} : { errno, code }),
    stack: error.stack
      ?.split('\n')
      .filter((line) => line.startsWith('    at '))
      .slice(0, 12),
    ...cause,
  }
}

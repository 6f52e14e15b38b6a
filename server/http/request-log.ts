import { randomUUID } from 'node:crypto'
import type { RequestHandler, Response } from 'express'
import type { Logger } from 'pino'
import { localsOf } from './locals.ts'

/**
 * One line a request: id, method, path, status, who, and the code of a refusal. Never a query, a header, a cookie or a
 * body: secrets travel there. Paths hold no secrets.
 */
export function requestLog(logger: Logger): RequestHandler {
  return (request, response, next) => {
    const id = randomUUID()
    const begun = performance.now()
    Object.assign(response.locals, { id, principal: null })
    response.setHeader('X-Request-Id', id)
    const path = request.path
    // Closed, not finished: a caller who left before the answer is a line too.
    response.once('close', () => {
      const level = levelOf(response)
      if (!logger.isLevelEnabled(level)) return
      const ms = Math.round(performance.now() - begun)
      logger[level]({ request: id, method: request.method, path, ...facts(response), ms }, 'request')
    })
    next()
  }
}

function facts(response: Response): object {
  const { principal, problem, failure } = localsOf(response)
  return {
    status: response.statusCode,
    address: response.req.ip,
    by: principal === null ? null : `${principal.kind}:${principal.id}`,
    ...(response.writableFinished ? {} : { cut: true }),
    ...(problem === undefined ? {} : { problem }),
    ...(failure === undefined ? {} : { cause: errorFacts(failure) }),
  }
}

function levelOf(response: Response): 'info' | 'warn' | 'error' {
  const { statusCode } = response
  // A batch answers 200 whatever became of its lines.
  if (statusCode >= 500 || localsOf(response).failure !== undefined) return 'error'
  return statusCode === 401 || statusCode === 403 || statusCode === 429 ? 'warn' : 'info'
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

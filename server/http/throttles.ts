import type { Request, RequestHandler } from 'express'
import { ipKeyGenerator, rateLimit } from 'express-rate-limit'
import { OgeeError } from '../../shared/errors.ts'
import { sha256 } from '../ledger/crypto.ts'
import { foldEmail } from '../models/person.ts'
import type { Quotas } from './deps.ts'
import { localsOf } from './locals.ts'

const minute = 60_000
const signInWindow = 15 * minute

/** Each token has its own allowance, so that one script gone wild leaves the others alone (ASVS V2.4.1). */
export function throttleToken(quotas: Quotas): RequestHandler {
  return rateLimit({
    windowMs: minute,
    limit: quotas.requestsPerTokenMinute,
    keyGenerator: (_, response) => localsOf(response as never).principal?.id ?? '',
    skip: (_, response) => localsOf(response as never).principal?.kind !== 'token',
    ...common,
  })
}

/**
 * Failed sign-ins are counted by account and address together, and by address. There is no count by account alone: a
 * stranger elsewhere must not be able to lock the owner out (ASVS V6.3.1).
 */
export function throttleSignIn(quotas: Quotas): RequestHandler {
  const failuresOnly = { windowMs: signInWindow, skipSuccessfulRequests: true, ...common }
  const byAddress = rateLimit({
    ...failuresOnly,
    limit: quotas.failedSignInsPerAddress,
    keyGenerator: (request) => ipKeyGenerator(request.ip ?? ''),
  })
  const byBoth = rateLimit({
    ...failuresOnly,
    limit: quotas.failedSignInsPerAccountAndAddress,
    keyGenerator: (request) => `${ipKeyGenerator(request.ip ?? '')} ${accountOf(request)}`,
  })
  return (request, response, next) => {
    void byAddress(request, response, (error?: unknown) => {
      if (error) next(error)
      else void byBoth(request, response, next)
    })
  }
}

const common = {
  standardHeaders: false,
  legacyHeaders: false,
  handler: (request: Request) => {
    const reset = (request as Request & { rateLimit?: { resetTime?: Date } }).rateLimit?.resetTime
    const seconds = Math.max(1, Math.ceil(((reset?.getTime() ?? 0) - Date.now()) / 1_000))
    throw new OgeeError('too-many-requests', `Too many requests. Try again in ${seconds} s.`, {
      facts: { retryAfterSeconds: seconds },
    })
  },
}

/** Hashed, so that the length of what is typed bounds nothing and the address is not kept. */
function accountOf(request: Request): string {
  const { email } = (request.body ?? {}) as { email?: unknown }
  return Buffer.from(sha256(Buffer.from(typeof email === 'string' ? foldEmail(email) : ''))).toString(
    'base64',
  )
}

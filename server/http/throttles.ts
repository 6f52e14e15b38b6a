import type { Request, RequestHandler } from 'express'
import { ipKeyGenerator, MemoryStore, rateLimit } from 'express-rate-limit'
import { OgeeError } from '../../shared/errors.ts'
import { sha256 } from '../ledger/crypto.ts'
import { foldEmail } from '../models/person.ts'
import type { Quotas } from './deps.ts'
import { localsOf } from './locals.ts'
import type { Principal } from './principal.ts'

const minute = 60_000
const signInWindow = 15 * minute

/** Each token has its own allowance, so that one script gone wild leaves the others alone (ASVS V2.4.1). */
export function throttleToken(quotas: Quotas): TokenThrottle {
  const store = new MemoryStore()
  const limit = quotas.requestsPerTokenMinute
  const byRequest = rateLimit({
    windowMs: minute,
    limit,
    store,
    keyGenerator: (_, response) => localsOf(response as never).principal?.id ?? '',
    skip: (_, response) => localsOf(response as never).principal?.kind !== 'token',
    ...common,
  })
  const countLines = async ({ kind, id }: Principal, lines: number): Promise<void> => {
    if (kind !== 'token') return
    // The request itself has counted as one.
    for (let i = 1; i < lines; i++) {
      const { totalHits, resetTime } = await store.increment(id)
      if (totalHits > limit) throw tooMany(resetTime)
    }
  }
  return { byRequest, countLines }
}

export type TokenThrottle = {
  byRequest: RequestHandler
  /** A line of a batch counts as a request; a block that goes over is refused whole, before anything of it is done. */
  countLines: (principal: Principal, lines: number) => Promise<void>
}

/** Blocks held in memory at a time: by this process, and of one caller. Each may be 8 MiB. */
const batchesAtOnce = { inAll: 16, ofOne: 8 }

/** Refuses a block before it is read when too many are under way; whoever sent it comes again in a second. */
export function limitBatches(): RequestHandler {
  const underWay = new Map<string, number>()
  let inAll = 0
  return (_, response, next) => {
    const id = localsOf(response).principal?.id ?? ''
    const own = underWay.get(id) ?? 0
    if (inAll >= batchesAtOnce.inAll || own >= batchesAtOnce.ofOne) {
      throw new OgeeError('too-many-requests', 'Too many batches at once. Send this block again in 1 s.', {
        facts: { retryAfterSeconds: 1 },
      })
    }
    inAll++
    underWay.set(id, own + 1)
    response.once('close', () => {
      inAll--
      const left = underWay.get(id)! - 1
      if (left === 0) underWay.delete(id)
      else underWay.set(id, left)
    })
    next()
  }
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
    throw tooMany((request as Request & { rateLimit?: { resetTime?: Date } }).rateLimit?.resetTime)
  },
}

function tooMany(reset: Date | undefined): OgeeError {
  const seconds = Math.max(1, Math.ceil(((reset?.getTime() ?? 0) - Date.now()) / 1_000))
  return new OgeeError('too-many-requests', `Too many requests. Try again in ${seconds} s.`, {
    facts: { retryAfterSeconds: seconds },
  })
}

/** Hashed, so that the length of what is typed bounds nothing and the address is not kept. */
function accountOf(request: Request): string {
  const { email } = (request.body ?? {}) as { email?: unknown }
  return Buffer.from(sha256(Buffer.from(typeof email === 'string' ? foldEmail(email) : ''))).toString(
    'base64',
  )
}

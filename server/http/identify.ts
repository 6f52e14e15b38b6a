import type { Request, RequestHandler } from 'express'
import { Passport } from 'passport'
import { Strategy as BearerStrategy } from 'passport-http-bearer'
import { OgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import { within } from './deadline.ts'
import type { TokenFinder } from './find-token.ts'
import { localsOf } from './locals.ts'
import type { PersonPrincipal, Principal, TokenPrincipal } from './principal.ts'
import type { Sessions } from './session.ts'

/**
 * Finds out who is asking: a bearer token (RFC 6750) or a session cookie, never both. Nobody is no error here; whether
 * somebody is needed is the business of the route's policy.
 */
export function identify(database: Database, sessions: Sessions, tokens: TokenFinder): RequestHandler {
  const byBearer = bearer(tokens)
  const bySession: RequestHandler = (request, response, next) => {
    void sessions.middleware(request, response, (error?: unknown) => {
      if (error) next(error)
      else
        personOf(database, sessions, request).then((person) => {
          localsOf(response).principal = person
          next()
        }, next)
    })
  }
  return (request, response, next) => {
    if ('access_token' in request.query) {
      throw new OgeeError(
        'token-malformed',
        'A token goes into the Authorization header, never into the address.',
      )
    }
    const { authorization, cookie } = request.headers
    if (authorization === undefined) return void bySession(request, response, next)
    if (cookie?.split(/;\s*/).some((pair) => pair.startsWith(`${sessions.cookieName}=`))) {
      throw new OgeeError('token-malformed', 'Send a token or a session cookie, not both.')
    }
    void byBearer(request, response, next)
  }
}

/** Asked again in the middle of a long answer: null once the token was revoked or the session has ended. */
export async function stillThere(
  deps: { database: Database; sessions: Sessions; tokens: TokenFinder },
  request: Request,
): Promise<Principal | null> {
  const { authorization } = request.headers
  return authorization === undefined
    ? await personOf(deps.database, deps.sessions, request)
    : await deps.tokens.find(authorization.slice('Bearer '.length))
}

function bearer(tokens: TokenFinder): RequestHandler {
  const passport = new Passport()
  passport.use(
    new BearerStrategy((text, done) => {
      within(tokens.find(text)).then((found) => done(null, found ?? false), done)
    }),
  )
  return (request, response, next) => {
    const answered = (error: unknown, found: TokenPrincipal | false | null): void => {
      if (error) next(error)
      else if (found) {
        localsOf(response).principal = found
        next()
      } else next(refusalOf(request))
    }
    passport.authenticate('bearer', { session: false }, answered)(request, response, next)
  }
}

/** The strategy tells a header that it cannot read from a token that is not good by the form alone; so do we. */
function refusalOf(request: Request): OgeeError {
  return /^Bearer [\w.~+/-]+=*$/i.test(request.headers.authorization ?? '')
    ? new OgeeError(
        'token-invalid',
        'The token is wrong, expired or revoked. Ask your administrator for a new one.',
      )
    : new OgeeError('token-malformed', 'The Authorization header must read: Bearer, one space, the token.')
}

/** The row is read each time: a person who was disabled or changed role is so at once. */
async function personOf(
  database: Database,
  sessions: Sessions,
  request: Request,
): Promise<PersonPrincipal | null> {
  const id = await sessions.personIdOf(request)
  if (id === null) return null
  const person = (await database.models.people.findByPk(id))?.get()
  if (!person || person.disabledAt !== null) return null
  return { kind: 'person', id: person.id, name: person.name, email: person.email, role: person.role }
}

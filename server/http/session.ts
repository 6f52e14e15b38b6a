import sessionStore from 'connect-session-sequelize'
import type { Request, RequestHandler, Response } from 'express'
import session, { type SessionData } from 'express-session'
import { limits } from '../../shared/limits.ts'
import { servedOverTls } from '../config.ts'
import type { Deps } from './deps.ts'

declare module 'express-session' {
  interface SessionData {
    personId: string
    /** Milliseconds since 1970, by the server's clock. */
    signedInAt: number
    seenAt: number
  }
}

const minute = 60_000

export type Sessions = {
  cookieName: string
  middleware: RequestHandler
  /** The person whose session this is; null when there is none or it has ended. */
  personIdOf: (request: Request) => Promise<string | null>
  open: (request: Request, personId: string) => Promise<void>
  end: (request: Request, response: Response) => Promise<void>
  stop: () => void
}

/** Server-side sessions in the database; the cookie holds a signed random reference and nothing else. */
export function createSessions({ database, sessionSecret, now, config }: Deps): Sessions {
  const tls = servedOverTls(config)
  const cookieName = tls ? '__Host-ogee' : 'ogee'
  const cookie = { httpOnly: true, sameSite: 'strict', path: '/', secure: tls } as const
  const Store = sessionStore(session.Store)
  const storeOptions = {
    db: database.sequelize,
    table: 'sessions',
    // Written when something changed, not with every request. The option is missing in the package's types.
    disableTouch: true,
    expiration: limits.sessionAbsoluteHours * 60 * minute,
  }
  const store = new Store(storeOptions)
  const middleware = session({
    name: cookieName,
    secret: sessionSecret,
    store,
    resave: false,
    saveUninitialized: false,
    cookie,
  })
  return {
    cookieName,
    middleware,
    personIdOf: async (request) => {
      const { personId } = request.session
      if (personId === undefined) return null
      if (hasEnded(request.session, now().getTime())) {
        await destroy(request)
        return null
      }
      // Once a minute is enough to know whether somebody idles, and spares a write with each request.
      if (now().getTime() - request.session.seenAt! >= minute) request.session.seenAt = now().getTime()
      return personId
    },
    open: async (request, personId) => {
      await regenerate(request)
      Object.assign(request.session, { personId, signedInAt: now().getTime(), seenAt: now().getTime() })
      await save(request)
    },
    end: async (request, response) => {
      await destroy(request)
      response.clearCookie(cookieName, cookie)
    },
    stop: () => store.stopExpiringSessions(),
  }
}

function hasEnded({ signedInAt = 0, seenAt = 0 }: Partial<SessionData>, now: number): boolean {
  return (
    now - seenAt > limits.sessionIdleMinutes * minute ||
    now - signedInAt > limits.sessionAbsoluteHours * 60 * minute
  )
}

const regenerate = (request: Request) => promised((done) => request.session.regenerate(done))
const save = (request: Request) => promised((done) => request.session.save(done))
const destroy = (request: Request) => promised((done) => request.session.destroy(done))

function promised(run: (done: (error?: unknown) => void) => void): Promise<void> {
  return new Promise((resolve, reject) => {
    run((error) => (error ? reject(error as Error) : resolve()))
  })
}

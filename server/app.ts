import express, { type Express, type RequestHandler, Router } from 'express'
import { OgeeError } from '../shared/errors.ts'
import { createRecorder } from './commands/recorder.ts'
import type { Deps } from './http/deps.ts'
import { tokenFinder } from './http/find-token.ts'
import { healthz, readyz } from './http/health.ts'
import { identify } from './http/identify.ts'
import { problemPage } from './http/problem-page.ts'
import { problemHandler } from './http/problems.ts'
import { requestLog } from './http/request-log.ts'
import { securityHeaders } from './http/security-headers.ts'
import { createServe } from './http/serve.ts'
import { createSessions } from './http/session.ts'
import { limitBatches, throttleSignIn, throttleToken } from './http/throttles.ts'
import { webApp } from './http/web-app.ts'
import { registerRoutes } from './routes/register.ts'

export type App = { express: Express; stop: () => void }

/** Builds the app from what it depends on. Nothing here knows where a dependency comes from. */
export function createApp(deps: Deps): App {
  const app = express()
  app.disable('x-powered-by')
  app.set('etag', false)
  app.set('query parser', 'simple')
  app.set('trust proxy', deps.config.trustedHops)
  app.use(requestLog(deps.logger), securityHeaders(deps.config), oneHost)
  app.get('/healthz', healthz)
  app.get('/readyz', readyz(deps))
  app.get('/problems/:code', problemPage)
  const sessions = createSessions(deps)
  const tokens = tokenFinder(deps.database, deps.now)
  const api = Router({ caseSensitive: true, strict: true })
  const throttle = throttleToken(deps.quotas)
  const serve = createServe(api, deps, {
    identify: identify(deps.database, sessions, tokens),
    throttleToken: throttle.byRequest,
    throttleSignIn: throttleSignIn(deps.quotas),
    limitBatches: limitBatches(),
  })
  registerRoutes(serve, api, { ...deps, sessions, tokens, throttle, record: createRecorder(deps) })
  api.use(nothingHere)
  app.use('/api/v1', api)
  app.use('/api', nothingHere)
  app.use(webApp(deps))
  app.use(nothingHere, problemHandler)
  return { express: app, stop: sessions.stop }
}

const nothingHere: RequestHandler = (request) => {
  throw new OgeeError(
    'not-found',
    `There is nothing at ${request.method} ${request.baseUrl}${request.path}.`.slice(0, 300),
  )
}

/** Node joins or drops doubled headers; two hosts are a sign that somebody before us read the request differently. */
const oneHost: RequestHandler = (request, response, next) => {
  const { rawHeaders } = request
  let hosts = 0
  for (let i = 0; i < rawHeaders.length; i += 2) {
    const name = rawHeaders[i]!
    if (name.length === 4 && name.toLowerCase() === 'host') hosts++
  }
  if (hosts > 1) {
    response.set('Connection', 'close')
    throw new OgeeError('bad-framing', 'The request names more than one host.')
  }
  next()
}

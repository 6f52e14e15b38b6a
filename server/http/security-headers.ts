import type { RequestHandler } from 'express'
import helmet from 'helmet'
import { type Config, servedOverTls } from '../config.ts'

const none = ["'none'"]
const self = ["'self'"]

/** The policy of the built app (decisions.md, Browser). */
const appPolicy = {
  defaultSrc: none,
  scriptSrc: self,
  styleSrc: self,
  fontSrc: self,
  connectSrc: self,
  workerSrc: self,
  manifestSrc: self,
  imgSrc: ["'self'", 'blob:'],
  baseUri: none,
  objectSrc: none,
  frameAncestors: none,
  formAction: self,
  requireTrustedTypesFor: ["'script'"],
  trustedTypes: ['ogee-worker'],
}

/** What an answer that is no page may do: nothing at all, not even when somebody opens it as one (ASVS V3.2.1). */
const sealedPolicy = {
  defaultSrc: none,
  baseUri: none,
  formAction: none,
  frameAncestors: none,
  sandbox: [] as string[],
}

const year = 365 * 24 * 60 * 60

/** Headers of every answer, by what it is: pages of the app, or anything else. */
export function securityHeaders(config: Pick<Config, 'tls' | 'baseUrl' | 'dev'>): RequestHandler {
  const common = {
    strictTransportSecurity: servedOverTls(config) ? { maxAge: year, includeSubDomains: true } : false,
    referrerPolicy: { policy: 'no-referrer' },
    xFrameOptions: { action: 'deny' },
    xDnsPrefetchControl: { allow: false },
  } as const
  const forApp = helmet({
    ...common,
    // Vite's page while developing uses inline scripts; the policy is tested on the build.
    contentSecurityPolicy: config.dev ? false : { useDefaults: false, directives: appPolicy },
  })
  const forData = helmet({
    ...common,
    contentSecurityPolicy: { useDefaults: false, directives: sealedPolicy },
  })
  const app = headersOf(forApp)
  const data = headersOf(forData)
  return (request, response, next) => {
    const isData = /^\/(?:api|problems|healthz|readyz)(?:\/|$)/.test(request.path)
    for (const [name, value] of isData ? data : app) response.setHeader(name, value)
    next()
  }
}

/** What helmet sets, asked once: it is the same for every answer. */
function headersOf(middleware: ReturnType<typeof helmet>): [string, string][] {
  const headers = new Map<string, string>()
  const collecting = {
    setHeader: (name: string, value: string) => headers.set(name, value),
    removeHeader: (name: string) => headers.delete(name),
  }
  middleware({} as never, collecting as never, (error?: unknown) => {
    if (error) throw error
  })
  return [...headers]
}

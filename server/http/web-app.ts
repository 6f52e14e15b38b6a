import { join } from 'node:path'
import { constants } from 'node:zlib'
import compression from 'compression'
import express, { type RequestHandler, Router } from 'express'
import { OgeeError } from '../../shared/errors.ts'
import type { Deps } from './deps.ts'

/** Above the package's 4, with which Brotli comes out larger than gzip; files are cached for ever, so it is done seldom. */
const brotli = { params: { [constants.BROTLI_PARAM_QUALITY]: 6 } }

const robots = 'User-agent: *\nDisallow: /\n'

/** The built app: hashed files for ever, the page itself never from a cache, and the page for every view's address. */
export function webApp({ config, devPage }: Deps): Router {
  const router = Router()
  router.get('/robots.txt', (_, response) => {
    response.type('text/plain; charset=utf-8').send(robots)
  })
  if (devPage) {
    router.use(devPage)
    return router
  }
  router.use(compression({ brotli }))
  const files = { index: false, dotfiles: 'ignore', redirect: false } as const
  router.use(
    '/assets',
    express.static(join(config.webRoot, 'assets'), { ...files, immutable: true, maxAge: '1y' }),
  )
  router.use(express.static(config.webRoot, { ...files, cacheControl: false, setHeaders: neverCached }))
  router.use(page(config.webRoot))
  return router
}

/** Any other address that a browser opens is a view of the app, which says itself when there is no such view. */
function page(webRoot: string): RequestHandler {
  return (request, response, next) => {
    const opens = request.method === 'GET' || request.method === 'HEAD'
    if (!opens || /\.\w+$/.test(request.path) || !request.accepts('html')) {
      next()
      return
    }
    neverCached(response)
    response.sendFile('index.html', { root: webRoot, cacheControl: false }, (error?: unknown) => {
      if (error && !response.headersSent) {
        next(new OgeeError('not-found', 'The web pages are not built here: run npm run build.'))
      }
    })
  }
}

function neverCached(response: { setHeader: (name: string, value: string) => unknown }): void {
  response.setHeader('Cache-Control', 'no-cache')
}

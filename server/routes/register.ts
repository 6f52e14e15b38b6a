import type { Router } from 'express'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import { openApiDocument } from '../../shared/contract/openapi.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Serve } from '../http/serve.ts'
import { productVersion } from '../root.ts'
import { batchRoutes } from './batches.ts'
import { designRoutes } from './designs.ts'
import { findingRoutes } from './findings.ts'
import { historyRoutes } from './history.ts'
import { instrumentRoutes } from './instruments.ts'
import { ledgerRoutes } from './ledger.ts'
import { lotRoutes } from './lots.ts'
import { revisionRoutes } from './revisions.ts'
import type { RouteDeps } from './route-deps.ts'
import { sessionRoutes } from './session.ts'
import { setupRoutes } from './setup.ts'
import { stationRoutes } from './stations.ts'
import { tokenRoutes } from './tokens.ts'
import { trimRoutes } from './trims.ts'
import { unitRoutes } from './units.ts'

/** Registers every endpoint, and shuts every other method of their paths. Starts only when none was forgotten. */
export function registerRoutes(serve: Serve, router: Router, deps: RouteDeps): void {
  const registered = new Set<string>()
  const noted: Serve = (endpoint, handler) => {
    registered.add(endpoint.id)
    serve(endpoint, handler)
  }
  for (const routes of [
    sessionRoutes,
    setupRoutes,
    designRoutes,
    revisionRoutes,
    lotRoutes,
    findingRoutes,
    historyRoutes,
    trimRoutes,
    batchRoutes,
    unitRoutes,
    stationRoutes,
    instrumentRoutes,
    tokenRoutes,
    ledgerRoutes,
  ]) {
    routes(noted, deps)
  }
  const forgotten = allEndpoints.filter((endpoint) => !registered.has(endpoint.id))
  if (forgotten.length > 0)
    throw new Error(`Not served: ${forgotten.map((endpoint) => endpoint.id).join(', ')}`)
  serveOpenApi(router)
  refuseOtherMethods(router)
}

function serveOpenApi(router: Router): void {
  // Made when it is first asked for: a server that comes back after a kill has better to do.
  let document: string | undefined
  router.get('/openapi.json', (_, response) => {
    document ??= JSON.stringify(openApiDocument(allEndpoints, productVersion))
    response.set('Cache-Control', 'no-cache').type('application/json; charset=utf-8').send(document)
  })
}

function refuseOtherMethods(router: Router): void {
  const methods = new Map<string, Set<string>>([['/openapi.json', new Set(['GET', 'HEAD'])]])
  for (const { path, method } of allEndpoints) {
    const known = methods.get(path) ?? new Set()
    methods.set(path, known.add(method))
    if (method === 'GET') known.add('HEAD')
  }
  for (const [path, known] of methods) {
    router.all(path, (request, response) => {
      response.set('Allow', [...known].join(', '))
      throw new OgeeError(
        'method-not-allowed',
        `${request.method} is not served here; ${[...known].join(', ')} is.`,
      )
    })
  }
}

import { getDesign, listDesigns, postDesign } from '../../shared/contract/designs.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { createDesign } from '../commands/create-design.ts'
import { readDesign, readDesigns } from '../commands/read-design.ts'
import type { Serve } from '../http/serve.ts'
import { designNotOpen, requireDesign } from '../policies/may-see.ts'
import type { RouteDeps } from './route-deps.ts'

export function designRoutes(serve: Serve, deps: RouteDeps): void {
  const { database } = deps

  serve(listDesigns, async ({ query, principal }) => {
    const only = principal.kind === 'token' ? principal.designs : null
    return readDesigns(database, { ...query, only })
  })

  serve(postDesign, async ({ body, rawBody, principal }) => {
    const { key, copiedFrom } = body
    requireDesign(principal, key)
    if (copiedFrom) requireDesign(principal, copiedFrom.design)
    const { document } = rawBody as { document: Json }
    return createDesign(deps, { key, document, author: principal, copiedFrom })
  })

  serve(getDesign, async ({ params, principal }) => {
    requireDesign(principal, params.key)
    const found = await readDesign(database, params.key)
    if (!found) throw designNotOpen()
    return found
  })
}

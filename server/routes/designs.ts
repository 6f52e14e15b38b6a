import { designDocument } from '../../shared/contract/design.ts'
import { getDesign, getRevision, listDesigns, listLots, postDesign } from '../../shared/contract/designs.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { createDesign } from '../commands/create-design.ts'
import { readDesign, readDesigns, readRevision } from '../commands/read-design.ts'
import { readLots } from '../commands/read-lots.ts'
import type { Serve } from '../http/serve.ts'
import { designReply, revisionReply } from '../models/design.ts'
import { maySeeDesign } from '../policies/may-see.ts'
import type { RouteDeps } from './route-deps.ts'

export function designRoutes(serve: Serve, deps: RouteDeps): void {
  const { database } = deps

  serve(listDesigns, async ({ query, principal }) => {
    const only = principal.kind === 'token' ? principal.designs : null
    return readDesigns(database, { ...query, only })
  })

  serve(postDesign, async ({ body, rawBody, principal }) => {
    if (!maySeeDesign(principal, body.key)) throw notOpen()
    const { document } = rawBody as { document: Json }
    return createDesign(deps, { key: body.key, document, author: principal })
  })

  serve(getDesign, async ({ params, principal }) => {
    const found = maySeeDesign(principal, params.key) ? await readDesign(database, params.key) : null
    if (!found) throw notOpen()
    return designReply(params.key, found)
  })

  serve(getRevision, async ({ params, principal }) => {
    const found = maySeeDesign(principal, params.key)
      ? await readRevision(database, params.key, params.number)
      : null
    if (!found) throw notOpen()
    return {
      ...revisionReply(found.row),
      key: params.key,
      document: designDocument.parse(JSON.parse(found.bytes.toString('utf8'))),
      bytes: found.bytes.toString('base64'),
    }
  })

  serve(listLots, async ({ query, principal }) => {
    const only = principal.kind === 'token' ? principal.designs : null
    return readLots(database, { ...query, only })
  })
}

const notOpen = () =>
  new OgeeError('not-found', 'There is no such design or revision, or it is not open to you.')

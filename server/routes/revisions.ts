import type { Response } from 'express'
import { designDocument } from '../../shared/contract/design.ts'
import { getRevision } from '../../shared/contract/designs.ts'
import {
  getDifference,
  getUse,
  postRelease,
  postReturn,
  postReview,
  postRevision,
  postWithdrawal,
  putRevision,
} from '../../shared/contract/revisions.ts'
import { diffDesigns } from '../../shared/design-diff/diff-designs.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { readRevision } from '../commands/read-design.ts'
import type { Actor } from '../commands/revisions/locked.ts'
import { readUse } from '../commands/revisions/read-use.ts'
import { releaseRevision } from '../commands/revisions/release-revision.ts'
import { returnRevision } from '../commands/revisions/return-revision.ts'
import { saveDraft } from '../commands/revisions/save-draft.ts'
import { startRevision } from '../commands/revisions/start-revision.ts'
import { submitRevision } from '../commands/revisions/submit-revision.ts'
import { withdrawRevision } from '../commands/revisions/withdraw-revision.ts'
import type { Principal } from '../http/principal.ts'
import type { Serve } from '../http/serve.ts'
import { revisionReply } from '../models/design.ts'
import { designNotOpen, requireDesign } from '../policies/may-see.ts'
import type { RouteDeps } from './route-deps.ts'

export function revisionRoutes(serve: Serve, deps: RouteDeps): void {
  serveReads(serve, deps)
  const { selfRelease: authorMayRelease } = deps.config

  serve(postRevision, async ({ params, body, rawBody, principal, response }) => {
    requireDesign(principal, params.key)
    const { document } = rawBody as { document?: Json }
    const { from } = body
    return tagged(response, await startRevision(deps, { ...params, document, from, by: actorOf(principal) }))
  })

  serve(putRevision, async ({ rawBody, response, ...input }) => {
    const { document } = rawBody as { document: Json }
    return tagged(response, await saveDraft(deps, { ...askedOf(input), document }))
  })

  serve(postReview, async ({ response, ...input }) =>
    tagged(response, await submitRevision(deps, askedOf(input))),
  )

  serve(postReturn, async ({ body, response, ...input }) =>
    tagged(response, await returnRevision(deps, { ...askedOf(input), ...body })),
  )

  serve(postRelease, async ({ response, ...input }) =>
    tagged(response, await releaseRevision(deps, askedOf(input), { authorMayRelease })),
  )

  serve(postWithdrawal, async ({ body, response, ...input }) =>
    tagged(response, await withdrawRevision(deps, { ...askedOf(input), ...body })),
  )
}

function serveReads(serve: Serve, { database, config }: RouteDeps): void {
  const read = async (principal: Principal, key: string, number: number | 'released') => {
    requireDesign(principal, key)
    const found = await readRevision(database, key, number)
    if (!found) throw designNotOpen()
    return { ...found, document: designDocument.parse(JSON.parse(found.bytes.toString('utf8'))) }
  }

  serve(getRevision, async ({ params: { key, number }, principal, response }) => {
    const { row, bytes, document } = await read(principal, key, number)
    return tagged(response, {
      ...revisionReply(row),
      key,
      document,
      bytes: bytes.toString('base64'),
      authorMayRelease: config.selfRelease,
    })
  })

  serve(getDifference, async ({ params: { key, number }, query, principal }) => {
    const before = await read(principal, key, number)
    const after = await read(principal, key, query.to)
    const compared = ({ row }: typeof before) => ({
      number: row.number,
      hash: row.documentHash.toString('hex'),
    })
    const difference = diffDesigns(before.document, after.document)
    return { ...difference, design: key, before: compared(before), after: compared(after) }
  })

  serve(getUse, async ({ params, principal }) => {
    requireDesign(principal, params.key)
    const items = await readUse(database.sql, params.key)
    if (!items) throw designNotOpen()
    return { items }
  })
}

type Changing = { principal: Principal; params: { key: string; number: number }; ifMatch: string }

function askedOf({ principal, params, ifMatch }: Changing) {
  requireDesign(principal, params.key)
  return { ...params, by: actorOf(principal), ifMatch }
}

const actorOf = ({ kind, id, name }: Principal): Actor => ({ kind, id, name })

function tagged<Reply extends { etag: string }>(response: Response, reply: Reply): Reply {
  response.set('ETag', reply.etag)
  return reply
}

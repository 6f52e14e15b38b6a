import * as z from 'zod'
import { limits } from '../limits.ts'
import { designDocument } from './design.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { designKey, instant, page, pageQuery, revisionNumber, sha256Hex } from './primitives.ts'

export const revisionState = z.enum(['draft', 'in-review', 'released', 'withdrawn'])

export const revisionLine = z.object({
  number: revisionNumber,
  state: revisionState,
  title: z.string(),
  author: z.string(),
  createdAt: instant,
  releasedBy: z.string().nullable(),
  releasedAt: instant.nullable(),
  hash: sha256Hex,
})

export const designLine = z
  .object({
    key: designKey,
    title: z.string(),
    released: revisionNumber.nullable(),
    revisions: z.array(revisionLine),
  })
  .meta({ id: 'DesignLine' })
export type DesignLine = z.output<typeof designLine>

/** `bytes` are the exact bytes of the document, base64: their SHA-256 is `hash`. `document` is the same, parsed. */
export const revision = revisionLine
  .extend({ key: designKey, document: designDocument, bytes: z.base64() })
  .meta({ id: 'Revision' })
export type Revision = z.output<typeof revision>

const reads = { roles: everyRole, scopes: ['designs:read', 'designs:write'] } as const

export const listDesigns = endpoint({
  id: 'listDesigns',
  method: 'GET',
  path: '/designs',
  summary: 'Designs by key',
  access: reads,
  query: z.strictObject(pageQuery),
  reply: { status: 200, schema: page(designLine) },
  refusals: [],
})

export const postDesign = endpoint({
  id: 'createDesign',
  method: 'POST',
  path: '/designs',
  summary: 'Create a design with a draft revision 1',
  access: { roles: ['engineer'], scopes: ['designs:write'] },
  body: z.strictObject({ key: designKey, document: designDocument }),
  reply: { status: 201, schema: designLine },
  refusals: ['already-exists'],
})

export const getDesign = endpoint({
  id: 'readDesign',
  method: 'GET',
  path: '/designs/:key',
  summary: 'One design and its revisions',
  access: reads,
  params: z.strictObject({ key: designKey }),
  reply: { status: 200, schema: designLine },
  refusals: ['not-found'],
})

export const getRevision = endpoint({
  id: 'readRevision',
  method: 'GET',
  path: '/designs/:key/revisions/:number',
  summary: 'One revision, or the highest released one',
  access: reads,
  params: z.strictObject({
    key: designKey,
    number: z.union([z.literal('released'), z.coerce.number().int().positive().max(1_000_000)]),
  }),
  reply: { status: 200, schema: revision },
  refusals: ['not-found'],
})

export const lot = z
  .object({
    key: z.string().max(limits.lotKeyMax),
    design: designKey,
    revision: revisionNumber,
    state: z.enum(['open', 'closed', 'signed-off']),
  })
  .meta({ id: 'Lot' })

export const listLots = endpoint({
  id: 'listLots',
  method: 'GET',
  path: '/lots',
  summary: 'Lots, newest first',
  access: { roles: everyRole, scopes: ['trims:read', 'trims:read-all', 'trims:write'] },
  query: z.strictObject({ design: designKey.optional(), ...pageQuery }),
  reply: { status: 200, schema: page(lot) },
  refusals: [],
})

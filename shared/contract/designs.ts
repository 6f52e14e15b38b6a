import * as z from 'zod'
import { designDocument } from './design.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { designKey, instant, page, pageQuery, revisionNumber, sha256Hex } from './primitives.ts'

export const revisionState = z.enum(['draft', 'in-review', 'released', 'withdrawn'])

/** Who did what and when: names are as they were then; null where it has not happened. */
export const revisionLine = z.object({
  number: revisionNumber,
  state: revisionState,
  title: z.string(),
  author: z.string(),
  createdAt: instant,
  basedOn: revisionNumber.nullable().describe('The revision of this design that it was started from'),
  writers: z
    .array(z.object({ kind: z.enum(['person', 'token']), id: z.string(), name: z.string() }))
    .describe('Its author and everybody who saved it since: none of them releases it'),
  savedBy: z.string(),
  savedAt: instant,
  submittedBy: z.string().nullable(),
  submittedAt: instant.nullable(),
  returnedBy: z.string().nullable().describe('Who last sent it back from review to draft'),
  returnedAt: instant.nullable(),
  returnReason: z.string().nullable(),
  releasedBy: z.string().nullable(),
  releasedAt: instant.nullable(),
  releasedByAuthor: z.boolean(),
  withdrawnBy: z.string().nullable(),
  withdrawnAt: instant.nullable(),
  withdrawReason: z.string().nullable(),
  hash: sha256Hex,
  etag: z.string().describe('What If-Match takes, quotes included; another one after every change'),
})
export type RevisionLine = z.output<typeof revisionLine>

export const designLine = z
  .object({
    key: designKey,
    title: z.string(),
    released: revisionNumber.nullable(),
    copiedFrom: z
      .object({ design: designKey, revision: revisionNumber })
      .nullable()
      .describe('The revision of another design that this one began as a copy of'),
    revisions: z.array(revisionLine),
  })
  .meta({ id: 'DesignLine' })
export type DesignLine = z.output<typeof designLine>

/** `bytes` are the exact bytes of the document, base64: their SHA-256 is `hash`. `document` is the same, parsed. */
export const revision = revisionLine
  .extend({
    key: designKey,
    document: designDocument,
    bytes: z.base64(),
    authorMayRelease: z
      .boolean()
      .describe('Whether this site lets an author release, which every release then says'),
  })
  .meta({ id: 'Revision' })
export type Revision = z.output<typeof revision>

export const readsDesigns = { roles: everyRole, scopes: ['designs:read', 'designs:write'] } as const

export const listDesigns = endpoint({
  id: 'listDesigns',
  method: 'GET',
  path: '/designs',
  summary: 'Designs by key',
  access: readsDesigns,
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
  body: z.strictObject({
    key: designKey,
    document: designDocument,
    copiedFrom: z.strictObject({ design: designKey, revision: revisionNumber }).optional(),
  }),
  reply: { status: 201, schema: designLine },
  refusals: ['already-exists', 'not-found'],
})

export const getDesign = endpoint({
  id: 'readDesign',
  method: 'GET',
  path: '/designs/:key',
  summary: 'One design and its revisions',
  access: readsDesigns,
  params: z.strictObject({ key: designKey }),
  reply: { status: 200, schema: designLine },
  refusals: ['not-found'],
})

/** In an address: a number, or the highest released one. */
export const numberOrReleased = z.union([
  z.literal('released'),
  z.coerce.number().int().positive().max(1_000_000),
])

export const getRevision = endpoint({
  id: 'readRevision',
  method: 'GET',
  path: '/designs/:key/revisions/:number',
  summary: 'One revision, or the highest released one',
  access: readsDesigns,
  params: z.strictObject({ key: designKey, number: numberOrReleased }),
  reply: { status: 200, schema: revision },
  refusals: ['not-found'],
})

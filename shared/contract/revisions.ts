import * as z from 'zod'
import { designDocument } from './design.ts'
import { numberOrReleased, readsDesigns, revisionLine } from './designs.ts'
import { endpoint } from './endpoint.ts'
import { designKey, finite, reason, revisionNumber, sha256Hex } from './primitives.ts'
import { sizeVerdict } from './size.ts'

/** Revisions of a design: draft → in review (and back) → released → withdrawn. Released ones never change. */

const writes = { roles: ['engineer'], scopes: ['designs:write'] } as const
/** What a person answers for: no token does it. */
const decides = { roles: ['engineer'], scopes: [] } as const

const ofRevision = z.strictObject({
  key: designKey,
  number: z.coerce.number().int().positive().max(1_000_000),
})

/** A revision without its document. */
export const revisionSummary = revisionLine.extend({ key: designKey }).meta({ id: 'RevisionSummary' })
export type RevisionSummary = z.output<typeof revisionSummary>

/**
 * Starts the next draft: from `document`; or as a copy of revision `from`; or of the highest released one (the highest
 * of all where none is). The same as the highest revision, and that a draft, is that draft and no second one.
 */
export const postRevision = endpoint({
  id: 'startRevision',
  method: 'POST',
  path: '/designs/:key/revisions',
  summary: 'Start the next draft revision, from a document or from another revision',
  access: writes,
  params: z.strictObject({ key: designKey }),
  body: z.strictObject({ document: designDocument.optional(), from: revisionNumber.optional() }),
  reply: { status: 201, schema: revisionSummary },
  refusals: ['not-found'],
})

/** Saving what is stored already changes nothing and succeeds whatever If-Match says, so that a retry does no harm. */
export const putRevision = endpoint({
  id: 'saveDraft',
  method: 'PUT',
  path: '/designs/:key/revisions/:number',
  summary: 'Save the document of a draft',
  access: writes,
  params: ofRevision,
  body: z.strictObject({ document: designDocument }),
  conditional: true,
  reply: { status: 200, schema: revisionSummary },
  refusals: ['not-found', 'revision-state'],
})

export const postReview = endpoint({
  id: 'submitRevision',
  method: 'POST',
  path: '/designs/:key/revisions/:number/review',
  summary: 'Hand a draft in for review',
  access: writes,
  params: ofRevision,
  conditional: true,
  reply: { status: 200, schema: revisionSummary },
  refusals: ['not-found', 'revision-state'],
})

export const postReturn = endpoint({
  id: 'returnRevision',
  method: 'POST',
  path: '/designs/:key/revisions/:number/return',
  summary: 'Send a revision in review back to draft, with a reason',
  access: decides,
  params: ofRevision,
  body: z.strictObject({ reason }),
  conditional: true,
  reply: { status: 200, schema: revisionSummary },
  refusals: ['not-found', 'revision-state'],
})

export const postRelease = endpoint({
  id: 'releaseRevision',
  method: 'POST',
  path: '/designs/:key/revisions/:number/release',
  summary: 'Release a revision in review for production; not by its author',
  access: decides,
  params: ofRevision,
  conditional: true,
  reply: { status: 200, schema: revisionSummary },
  refusals: ['not-found', 'revision-state', 'author-cannot-release'],
})

/** What stands on a revision: its lots, and units whose current codes come from it. `first` are the first few. */
export const revisionUse = z
  .object({
    revision: revisionNumber,
    lots: z.int().nonnegative(),
    openLots: z.object({ count: z.int().nonnegative(), first: z.array(z.string()) }),
    units: z.object({ count: z.int().nonnegative(), first: z.array(z.string()) }),
  })
  .meta({ id: 'RevisionUse' })
export type RevisionUse = z.output<typeof revisionUse>

export const postWithdrawal = endpoint({
  id: 'withdrawRevision',
  method: 'POST',
  path: '/designs/:key/revisions/:number/withdrawal',
  summary: 'Withdraw a released revision, with a reason; says what still uses it',
  access: decides,
  params: ofRevision,
  body: z.strictObject({ reason }),
  conditional: true,
  reply: { status: 200, schema: revisionSummary.extend({ use: revisionUse }) },
  refusals: ['not-found', 'revision-state'],
})

/** One entry for each revision, lowest first. */
export const getUse = endpoint({
  id: 'readUse',
  method: 'GET',
  path: '/designs/:key/use',
  summary: 'Lots, and units that carry codes, under each revision of a design',
  access: readsDesigns,
  params: z.strictObject({ key: designKey }),
  reply: { status: 200, schema: z.object({ items: z.array(revisionUse) }) },
  refusals: ['not-found'],
})

/** One field that differs. `path` is a JSON pointer into the newer document, into the older one where it was removed. */
export const designChange = z.object({
  path: z.string(),
  kind: z.enum(['changed', 'added', 'removed']),
  /** Where it stands, in words: `Gain adjuster, auxiliary DAC, bits`. */
  label: z.string(),
  /** With its unit, as a screen shows it; null where there is none. */
  before: z.string().nullable(),
  after: z.string().nullable(),
  sentence: z.string(),
})
export type DesignChange = z.output<typeof designChange>

const adjusterAnswer = z.object({
  verdict: sizeVerdict,
  requiredBits: z.int(),
  bits: z.int(),
  lowV: finite,
  highV: finite,
  reachMargin: finite.nullable(),
  stepMargin: finite,
})

/** What a design's sizing comes to in one range: the numbers that a reviewer asks for; or why there are none. */
export const designAnswer = z.discriminatedUnion('sized', [
  z.object({
    sized: z.literal(true),
    verdict: sizeVerdict,
    adjusters: z.object({ gain: adjusterAnswer.optional(), offset: adjusterAnswer.optional() }),
    targetV: finite,
    worstResidualV: finite,
    worstResidualLsb: finite,
  }),
  z.object({ sized: z.literal(false), code: z.string(), detail: z.string() }),
])
export type DesignAnswer = z.output<typeof designAnswer>

/** Effect on the answer, by range; null where one of the two has no such range. Sentences name what changed, none: nothing did. */
export const designEffect = z.object({
  range: z.string(),
  before: designAnswer.nullable(),
  after: designAnswer.nullable(),
  sentences: z.array(z.string()),
})
export type DesignEffect = z.output<typeof designEffect>

export const designDifference = z
  .object({
    format: z.literal('ogee.difference/1'),
    changes: z.array(designChange),
    effects: z.array(designEffect),
  })
  .meta({ id: 'DesignDifference' })
export type DesignDifference = z.output<typeof designDifference>

const compared = z.object({ number: revisionNumber, hash: sha256Hex })

export const getDifference = endpoint({
  id: 'compareRevisions',
  method: 'GET',
  path: '/designs/:key/revisions/:number/difference',
  summary:
    'What changed from one revision to another, in words and numbers, and what that does to the answer',
  access: readsDesigns,
  params: z.strictObject({ key: designKey, number: numberOrReleased }),
  query: z.strictObject({ to: numberOrReleased }),
  reply: {
    status: 200,
    schema: z.object({
      ...designDifference.shape,
      design: designKey,
      before: compared,
      after: compared,
    }),
  },
  refusals: ['not-found'],
})

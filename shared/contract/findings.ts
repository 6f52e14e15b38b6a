import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { designKey, instant, lotKey, page, pageQuery, recordId, sha256Hex } from './primitives.ts'

/** What an auditor found, what was answered, and that it is closed. All of it is kept for good; none of it changes a record. */

const words = z
  .string()
  .max(limits.findingMax)
  .refine((text) => [...text.trim()].length >= limits.reasonMin, `At least ${limits.reasonMin} characters.`)

const onRecord = z.strictObject({ kind: z.literal('record'), record: recordId })
const onLot = z.strictObject({ kind: z.literal('lot'), design: designKey, lot: lotKey })

const writer = z.object({ id: z.string(), name: z.string() })

const answer = z.object({
  id: z.uuid(),
  act: z.enum(['answer', 'close']),
  text: z.string(),
  by: writer,
  at: instant,
  leaf: sha256Hex,
})

export const finding = z
  .object({
    id: z.uuid(),
    subject: z.discriminatedUnion('kind', [
      z.object({ ...onRecord.shape, number: z.int().positive(), unit: z.string() }),
      onLot,
    ]),
    text: z.string(),
    by: writer,
    at: instant,
    leaf: sha256Hex.describe('Hash of its leaf in the ledger'),
    state: z.enum(['open', 'answered', 'closed']),
    answers: z.array(answer),
  })
  .meta({ id: 'Finding' })
export type Finding = z.output<typeof finding>

const params = z.strictObject({ id: z.uuid() })
const body = z.strictObject({ text: words })
const reply = { status: 201, schema: finding } as const
const written = ['idempotency-key-missing', 'idempotency-key-reused'] as const

export const postFinding = endpoint({
  id: 'writeFinding',
  method: 'POST',
  path: '/findings',
  summary: 'Write a finding on a record or a lot; it is kept for good',
  access: { roles: ['auditor'], scopes: [] },
  body: z.strictObject({ subject: z.discriminatedUnion('kind', [onRecord, onLot]), text: words }),
  idempotent: true,
  reply,
  refusals: ['not-found', ...written],
})

export const postAnswer = endpoint({
  id: 'answerFinding',
  method: 'POST',
  path: '/findings/:id/answers',
  summary: 'Answer an open finding',
  access: { roles: ['engineer'], scopes: [] },
  params,
  body,
  idempotent: true,
  reply,
  refusals: ['finding-closed', ...written],
})

export const postClosing = endpoint({
  id: 'closeFinding',
  method: 'POST',
  path: '/findings/:id/closing',
  summary: 'Close a finding, with the reason; it is closed once',
  access: { roles: ['auditor'], scopes: [] },
  params,
  body,
  idempotent: true,
  reply,
  refusals: ['finding-closed', ...written],
})

export const listFindings = endpoint({
  id: 'listFindings',
  method: 'GET',
  path: '/findings',
  summary: 'Findings, newest first: all, those on a record and its lot, or those on a lot and its records',
  access: { roles: everyRole, scopes: [] },
  query: z.strictObject({
    record: recordId.optional(),
    design: designKey.optional(),
    lot: lotKey.optional(),
    state: z.enum(['open', 'closed']).optional(),
    ...pageQuery,
  }),
  reply: { status: 200, schema: page(finding) },
  refusals: [],
})

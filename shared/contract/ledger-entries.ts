import * as z from 'zod'
import { endpoint } from './endpoint.ts'
import { instant, recordId, sha256Hex } from './primitives.ts'
import { recordLine } from './record.ts'

/** What checking all of the ledger reads: everything as it is stored, wrong or right. */

const wholeLedger = {
  roles: ['administrator', 'engineer', 'auditor'],
  scopes: ['ledger:read'],
} as const

/** A row of the table of records, with what no list shows. */
export const storedRow = recordLine.omit({ finding: true }).extend({
  follows: recordId.nullable(),
  byId: z.string().nullable(),
  notices: z.string().describe('As stored: JSON'),
  receipt: z.object({ key: z.string(), signature: z.string() }),
})
export type StoredRow = z.output<typeof storedRow>

const entry = z.object({
  leafBytes: z.int(),
  index: z.int().nonnegative(),
  nodes: z.string().describe('Stored hashes of the subtrees that this leaf completes, lowest first'),
  hash: sha256Hex.nullable(),
  row: storedRow.nullable(),
  document: z.string().nullable().optional().describe('Of a release: the bytes of the revision, base64'),
  leaf: z
    .object({ at: instant, body: z.unknown(), kind: z.string() })
    .nullable()
    .describe('Its exact bytes are what was hashed; they stand last, and are leafBytes long'),
})
const lastLine = z.object({
  end: z.literal(true),
  size: z.int().nonnegative().describe('Entries that the ledger has by its head'),
  next: z.int().nonnegative().nullable().describe('Go on from here'),
})

export const listEntries = endpoint({
  id: 'listEntries',
  method: 'GET',
  path: '/ledger/entries',
  summary: 'Entries of the ledger as stored, with their records and receipts, in order',
  access: wholeLedger,
  query: z.strictObject({
    from: z.coerce.number().int().min(0).max(Number.MAX_SAFE_INTEGER).default(0),
    limit: z.coerce.number().int().min(1).max(5_000).default(1_000),
  }),
  ndjson: true,
  reply: { status: 200, schema: z.union([entry, lastLine]) },
  refusals: [],
})

export const stray = z.object({
  what: z.enum(['leaf', 'record', 'entry', 'node', 'document', 'checkpoint']),
  name: z.string(),
  record: recordId.nullable(),
  message: z.string(),
})
export type Stray = z.output<typeof stray>

export const listStrays = endpoint({
  id: 'listStrays',
  method: 'GET',
  path: '/ledger/strays',
  summary: 'Recorded rows that belong to no entry of the ledger, some at a time',
  access: wholeLedger,
  query: z.strictObject({ after: z.coerce.number().int().min(0).default(0) }),
  reply: {
    status: 200,
    schema: z.object({ items: z.array(stray), next: z.int().nonnegative().nullable() }),
  },
  refusals: [],
})

import * as z from 'zod'
import { endpoint, everyRole } from './endpoint.ts'
import { instant, page, pageQuery, reason, sha256Hex } from './primitives.ts'
import { keyStatement } from './proof.ts'

/** What the ledger was signed with, and when. */

export const storedCheckpoint = z
  .object({
    number: z.int().positive(),
    size: z.int().nonnegative(),
    root: sha256Hex,
    at: instant,
    note: z.string().describe('Signed note'),
  })
  .meta({ id: 'Checkpoint' })
export type StoredCheckpoint = z.output<typeof storedCheckpoint>

const order = z.enum(['newest', 'oldest']).default('newest')

export const listCheckpoints = endpoint({
  id: 'listCheckpoints',
  method: 'GET',
  path: '/ledger/checkpoints',
  summary: 'Signed checkpoints',
  access: { roles: everyRole, scopes: ['ledger:read'] },
  query: z.strictObject({
    order,
    size: z.coerce.number().int().min(0).optional().describe('Only those over so many entries'),
    ...pageQuery,
  }),
  reply: { status: 200, schema: page(storedCheckpoint) },
  refusals: [],
})

export const ledgerKey = z.object({
  number: z.int().positive(),
  key: z.string().describe('Verifier key, as in ogee.pub'),
  at: instant,
  statement: keyStatement.nullable().describe('That it took the place of the one before, signed by both'),
})

export type LedgerKeyRow = z.output<typeof ledgerKey>

export const listKeys = endpoint({
  id: 'listLedgerKeys',
  method: 'GET',
  path: '/ledger/keys',
  summary: 'Every key that the ledger was signed with, oldest first',
  access: 'open',
  reply: { status: 200, schema: z.object({ items: z.array(ledgerKey) }) },
  refusals: [],
})

export const postKey = endpoint({
  id: 'changeLedgerKey',
  method: 'POST',
  path: '/ledger/keys',
  summary:
    'Put a new key in the place of the one that signs the ledger; what the old one signed still checks',
  access: { roles: ['administrator'], scopes: [] },
  body: z.strictObject({ reason }),
  reply: { status: 201, schema: ledgerKey },
  refusals: ['ledger-key-differs'],
})

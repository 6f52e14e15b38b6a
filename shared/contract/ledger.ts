import * as z from 'zod'
import { endpoint, everyRole } from './endpoint.ts'
import { recordId } from './primitives.ts'
import { consistencyProof, proof } from './proof.ts'

/** What an outsider may know, without signing in. Both are texts of the signed-note format. */

export const getCheckpoint = endpoint({
  id: 'readCheckpoint',
  method: 'GET',
  path: '/ledger/checkpoint',
  summary: 'The newest signed checkpoint: origin, size, root, signature',
  access: 'open',
  reply: { status: 200, schema: z.string(), mediaType: 'text/plain' },
  refusals: [],
})

export const getLedgerKey = endpoint({
  id: 'readLedgerKey',
  method: 'GET',
  path: '/ledger/key',
  summary: 'The verifier key in force, as in ogee.pub',
  access: 'open',
  reply: { status: 200, schema: z.string(), mediaType: 'text/plain' },
  refusals: [],
})

const size = z.coerce.number().int().min(1).max(Number.MAX_SAFE_INTEGER)

export const getConsistency = endpoint({
  id: 'proveConsistency',
  method: 'GET',
  path: '/ledger/consistency',
  summary: 'Proof that the ledger of one size is the beginning of the ledger of a later size',
  access: 'open',
  query: z.strictObject({
    from: size.describe('Entries of the older ledger'),
    to: size.optional().describe('Entries of the newer one; the newest checkpoint when left out'),
  }),
  reply: { status: 200, schema: consistencyProof },
  refusals: [],
})

export const getProof = endpoint({
  id: 'proveRecord',
  method: 'GET',
  path: '/ledger/proof/:recordId',
  summary: 'Proof that a record stands in the ledger, checked offline with the public key alone',
  access: { roles: everyRole, scopes: ['trims:read', 'trims:read-all', 'ledger:read'] },
  params: z.strictObject({ recordId }),
  reply: { status: 200, schema: proof },
  refusals: ['not-found', 'not-in-ledger-yet'],
})

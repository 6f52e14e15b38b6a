import * as z from 'zod'
import { endpoint } from './endpoint.ts'

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

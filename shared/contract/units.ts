import * as z from 'zod'
import { endpoint, everyRole } from './endpoint.ts'
import {
  channel,
  codePair,
  designKey,
  instant,
  rangeId,
  recordId,
  revisionNumber,
  serial,
} from './primitives.ts'

/** What is loaded in one channel and range of a unit: the codes last accepted, and the record they come from. */
export const currentCodes = z.object({
  channel,
  range: rangeId,
  codes: codePair.nullable().describe('Null: no accepted codes'),
  words: z.object({ gain: z.string().optional(), offset: z.string().optional() }).nullable(),
  record: recordId.nullable(),
  number: z.int().positive().nullable(),
  revision: revisionNumber.nullable(),
  recordedAt: instant.nullable(),
  lastRecord: recordId.describe('The newest record of any kind'),
  pass: z.int().nonnegative().describe('Trims in the chain so far'),
})

export const unit = z
  .object({ design: designKey, serial, current: z.array(currentCodes) })
  .meta({ id: 'Unit' })
export type Unit = z.output<typeof unit>

export const findUnits = endpoint({
  id: 'findUnits',
  method: 'GET',
  path: '/units',
  summary: 'Units of that serial with their current codes',
  access: { roles: everyRole, scopes: ['trims:read', 'trims:read-all', 'trims:write'] },
  query: z.strictObject({ serial, design: designKey.optional() }),
  reply: { status: 200, schema: z.object({ items: z.array(unit) }) },
  refusals: [],
})

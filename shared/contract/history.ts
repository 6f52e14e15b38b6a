import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint, everyRole } from './endpoint.ts'
import {
  designKey,
  instant,
  lotKey,
  outcome,
  page,
  recordId,
  revisionNumber,
  serial,
  verdict,
} from './primitives.ts'
import { kind, recordLine } from './record.ts'

/** Values of one filter, separated by commas in the address; one of them is enough. */
const anyOf = <Item extends z.ZodType<string, string>>(item: Item) =>
  z
    .string()
    .max(limits.filterTextMax)
    // Each once: a value said twice would find its records twice.
    .transform((text) => [...new Set(text.split(','))])
    .pipe(z.array(item).min(1).max(limits.filterValuesMax))

/** A day stands for all of it, in UTC: `from` means its beginning, `to` its end. */
const dayOrInstant = z.union([z.iso.date().refine((day) => day >= '1970' && day < '2200'), instant])

/** A token's eight characters, or a person's id. */
const recorderId = z.union([recordId, z.string().regex(/^[0-9A-Za-z]{8}$/)])

/**
 * What History can be narrowed to. All that are given must match. `serial` finds what a serial, or a part of it behind one of its
 * first three separators (dash, underscore, dot, slash, space), begins with, case as written; `unit` is the whole serial.
 */
export const recordFilters = {
  unit: serial.optional().describe('The whole serial'),
  serial: z
    .string()
    .min(1)
    .max(limits.serialMax)
    .optional()
    .describe('What the serial, or a part of it behind a separator, begins with'),
  lot: anyOf(lotKey).optional(),
  design: anyOf(designKey).optional(),
  revision: z.coerce.number().pipe(revisionNumber).optional().describe('Of the one design that is named'),
  station: anyOf(z.string().min(1).max(limits.stationNameMax)).optional().describe('Name or id'),
  by: anyOf(recorderId).optional().describe('Id of a person or of a token'),
  kind: anyOf(kind).optional(),
  verdict: anyOf(z.union([verdict, outcome])).optional(),
  attempt: z.coerce
    .number()
    .int()
    .min(2)
    .max(1_000_000)
    .optional()
    .describe('At least this many measurements of the kind for unit, channel and range on the UTC day'),
  finding: z
    .string()
    .pipe(z.enum(['open', 'any']))
    .optional()
    .describe('With a finding on the record itself'),
  from: dayOrInstant.optional(),
  to: dayOrInstant.optional(),
}

const mayRead = { roles: everyRole, scopes: ['trims:read', 'trims:read-all'] } as const

/** How many match, up to a bound that keeps counting cheap. */
export const countRecords = endpoint({
  id: 'countRecords',
  method: 'GET',
  path: '/history/count',
  summary: 'How many records match, counted up to a bound',
  access: mayRead,
  query: z.strictObject(recordFilters),
  reply: {
    status: 200,
    schema: z.object({
      count: z.int().nonnegative().nullable().describe('Null when counting would have taken too long'),
      more: z.boolean().describe('There are more than `count`'),
    }),
  },
  refusals: [],
})

/** Everything that matches, newest first, a record a line: what a page shows, without its end. */
export const exportRecords = endpoint({
  id: 'exportRecords',
  method: 'GET',
  path: '/history/export.ndjson',
  summary: 'Every record that matches, as lines of JSON',
  access: mayRead,
  query: z.strictObject(recordFilters),
  ndjson: true,
  reply: { status: 200, schema: recordLine },
  refusals: [],
})

export const exportRecordsCsv = endpoint({
  id: 'exportRecordsAsCsv',
  method: 'GET',
  path: '/history/export.csv',
  summary: 'Every record that matches, as CSV that no spreadsheet takes for formulas',
  access: mayRead,
  query: z.strictObject(recordFilters),
  reply: { status: 200, schema: z.string(), mediaType: 'text/csv' },
  refusals: [],
})

/** Who has recorded anything that the caller may see: what a filter by person or token can be chosen from. */
export const listRecorders = endpoint({
  id: 'listRecorders',
  method: 'GET',
  path: '/history/recorders',
  summary: 'People and tokens that have recorded',
  access: mayRead,
  reply: {
    status: 200,
    schema: page(z.object({ id: z.string(), name: z.string().describe('As of their newest record') })),
  },
  refusals: [],
})

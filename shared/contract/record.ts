import * as z from 'zod'
import { limits } from '../limits.ts'
import { codesDocument } from './codes.ts'
import { instrumentFacts } from './instruments.ts'
import { point, points } from './point.ts'
import {
  applied,
  channel,
  codePair,
  designKey,
  instant,
  instrumentId,
  lotKey,
  note,
  outcome,
  rangeId,
  recordId,
  revisionNumber,
  role,
  serial,
  sha256Hex,
  verdict,
} from './primitives.ts'
import { receipt } from './receipt.ts'
import { verifyDocument } from './verify.ts'

export const kind = z.enum(['trim', 'verify', 'override', 'withdraw'])
export type Kind = z.output<typeof kind>

export const effectsChoice = z.enum(['design', 'learned'])

export const conditions = z.strictObject({
  temperatureC: z.number().min(-273.15).max(1000).optional(),
  humidityPercent: z.number().min(0).max(100).optional(),
  instrument: instrumentId.optional(),
  note: note.optional(),
})

/** What a station computed and gave out without the server. */
export const claimed = z.strictObject({ solver: z.string().max(32), codes: codePair.nullable(), at: instant })

/** Body of `POST /trims`, and, with `key`, a line of `POST /batches`. */
export const recordRequest = z
  .strictObject({
    kind: kind.default('trim'),
    design: designKey,
    revision: z.union([revisionNumber, z.literal('released')]).optional(),
    unit: serial,
    lot: lotKey.optional(),
    channel: channel.optional(),
    range: rangeId.optional(),
    applied: applied.optional(),
    effects: effectsChoice.default('design'),
    points: points.optional(),
    conditions: conditions.optional(),
    measuredAt: instant.optional(),
    follows: z.union([recordId, z.literal('last')]).optional(),
    reason: z.string().max(limits.reasonMax).optional(),
    claimed: claimed.optional(),
  })
  .meta({ id: 'RecordRequest' })
export type RecordRequest = z.output<typeof recordRequest>

export const notice = z.object({
  code: z.enum([
    'newer-record',
    'revision-withdrawn',
    'released-by-author',
    'instrument-overdue',
    'clock-skew',
    'claimed-codes-differ',
    'replayed',
    'overridden',
    'withdrawn',
    'finding-open',
  ]),
  message: z.string(),
  record: recordId.optional(),
})
export type Notice = z.output<typeof notice>

/** Who recorded, by name as it was then. A token acts for its station and never for a person. */
export const recordedBy = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('person'), id: z.string(), name: z.string(), role }),
  z.object({ kind: z.literal('token'), id: z.string(), name: z.string() }),
])

/**
 * A record without what may change around it. RFC 8785 of exactly this object is what the ledger keeps; it is never
 * changed afterwards. An override or a withdrawal is a record of its own.
 */
export const recordBody = z.object({
  format: z.literal('ogee.record/1'),
  id: recordId,
  number: z.int().positive(),
  kind,
  unit: serial,
  channel,
  range: rangeId,
  lot: lotKey.nullable(),
  design: designKey,
  revision: revisionNumber,
  designHash: sha256Hex.describe('SHA-256 of the exact bytes of the revision'),
  pass: z.int().nonnegative(),
  follows: recordId.nullable(),
  applied: applied.nullable(),
  effects: effectsChoice.nullable(),
  points: z.array(point).nullable().describe('As given'),
  conditions,
  instrument: instrumentFacts.optional().describe('The instrument named, as it was at that moment'),
  reason: z.string().nullable(),
  claimed: claimed.nullable(),
  result: z.union([codesDocument, verifyDocument]).nullable(),
  verdict: z.union([verdict, outcome]).nullable(),
  accepted: z.boolean(),
  by: recordedBy,
  station: z.string().nullable(),
  measuredAt: instant.nullable(),
  recordedAt: instant,
})
export type RecordBody = z.output<typeof recordBody>

export const record = recordBody
  .extend({
    notices: z.array(notice),
    receipt,
    ledger: z
      .object({ index: z.int().nonnegative() })
      .nullable()
      .describe('Place in the ledger; null until it has one'),
  })
  .meta({ id: 'Record' })
export type Record = z.output<typeof record>

/** A line of a list of records. */
export const recordLine = z
  .object({
    id: recordId,
    number: z.int().positive(),
    kind,
    unit: serial,
    channel,
    range: rangeId,
    lot: lotKey.nullable(),
    design: designKey,
    revision: revisionNumber,
    pass: z.int().nonnegative(),
    verdict: z.union([verdict, outcome]).nullable(),
    accepted: z.boolean(),
    gainErrorPpm: z.number().nullable(),
    offsetErrorV: z.number().nullable(),
    gainCode: z.int().nullable(),
    offsetCode: z.int().nullable(),
    worstLsb: z.number().nullable().describe('Predicted for trims, measured for verifications'),
    attempt: z
      .int()
      .positive()
      .nullable()
      .describe('Which measurement of its kind this is for its unit, channel and range on its UTC day'),
    by: z.string(),
    station: z.string().nullable(),
    measuredAt: instant.nullable(),
    recordedAt: instant,
    finding: z.enum(['open', 'closed']).nullable().describe('Findings on the record itself'),
  })
  .meta({ id: 'RecordLine' })
export type RecordLine = z.output<typeof recordLine>

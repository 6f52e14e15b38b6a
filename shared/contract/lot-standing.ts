import * as z from 'zod'
import { channel, instant, outcome, rangeId, recordId, verdict } from './primitives.ts'

/**
 * How a channel and range of a unit, or a whole unit by its worst one, stands in its lot. From worst to best; `incomplete`
 * is a unit without some channel or range that others of the lot have.
 */
export const standing = z.enum([
  'out-of-reach',
  'fail',
  'conditional-fail',
  'suspect',
  'incomplete',
  'too-coarse',
  'conditional-pass',
  'overridden',
  'ok-later',
  'ok-first',
])
export type Standing = z.output<typeof standing>

/** Counted in the yield. */
export const goodStandings: readonly Standing[] = ['ok-first', 'ok-later', 'overridden']
/** A lot is not signed off before an engineer has said what becomes of these. */
export const undecidedStandings: readonly Standing[] = [
  'out-of-reach',
  'fail',
  'conditional-fail',
  'suspect',
  'incomplete',
]

export const lotCounts = z.object({
  units: z.int().nonnegative().describe('With records, reference units apart'),
  good: z.int().nonnegative(),
  undecided: z
    .int()
    .nonnegative()
    .describe('Units whose standing needs a decision; missing ones not among them'),
  missing: z.int().nonnegative().describe('Expected and not recorded'),
  references: z.int().nonnegative(),
  byStanding: z.record(standing, z.int().nonnegative()),
  share: z.number().nullable().describe('good/units; null without units'),
  low95: z.number().nullable().describe('Wilson interval of the share'),
  high95: z.number().nullable(),
})
export type LotCounts = z.output<typeof lotCounts>

const said = { record: recordId, station: z.string().nullable(), at: instant }

/** A channel and range of a unit in a lot, from its records there that were not withdrawn. */
export const lotPlace = z.object({
  channel,
  range: rangeId,
  standing,
  pass: z.int().nonnegative(),
  found: z
    .object({ ...said, gainErrorPpm: z.number(), offsetErrorV: z.number(), verdict })
    .nullable()
    .describe('The first trim that is not suspect, else the first'),
  codes: z
    .object({
      ...said,
      number: z.int().positive(),
      gain: z.int().nonnegative().optional(),
      offset: z.int().nonnegative().optional(),
    })
    .nullable()
    .describe('The codes last accepted in this lot'),
  left: z
    .object({ ...said, worstLsb: z.number(), outcome })
    .nullable()
    .describe('The last verification after the last trim'),
  attention: z
    .object({
      ...said,
      verdict: z.union([verdict, outcome]),
      flags: z.array(z.object({ flag: z.string(), code: z.int().nullable() })),
      reachUsed: z.object({
        gain: z.number().nullable().optional(),
        offset: z.number().nullable().optional(),
      }),
      worstLsb: z.number().nullable(),
    })
    .nullable()
    .describe('What makes it worth a look: the record behind any standing but the good ones'),
})
export type LotPlace = z.output<typeof lotPlace>

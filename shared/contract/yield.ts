import * as z from 'zod'
import { finite } from './primitives.ts'

/** `ogee.yield/1`: yield by simulation. Shares are ratios of all units. */

const share = z.number().min(0).max(1)
const histogram = z.object({
  from: finite,
  width: finite,
  counts: z.array(z.int().nonnegative()),
  over: z.int().nonnegative(),
})
const codesSpread = histogram.extend({
  least: z.int().nullable(),
  most: z.int().nullable(),
  mean: finite.nullable(),
})

export const yieldDocument = z
  .object({
    format: z.literal('ogee.yield/1'),
    solver: z.string(),
    range: z.string(),
    seed: z.int().nonnegative(),
    trials: z.int().positive(),
    stopped: z.boolean(),
    effects: z.enum(['design', 'learned']),
    toleranceV: finite,
    toleranceLsb: finite,
    passes: z.array(
      z.object({
        pass: z.int().positive(),
        yield: share,
        low95: share,
        high95: share,
        outOfReach: share,
        tooCoarse: share,
        failing: share,
      }),
    ),
    remainingLsb: z.object({
      units: z.int().nonnegative(),
      quantiles: z.array(z.object({ probability: share, lsb: finite.nullable() })),
      histogram,
    }),
    codes: z.object({ gain: codesSpread.optional(), offset: codesSpread.optional() }),
    generator: z.string(),
    normalMethod: z.string(),
  })
  .meta({ id: 'Yield' })
export type YieldDocument = z.output<typeof yieldDocument>

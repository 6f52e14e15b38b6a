import * as z from 'zod'
import { finite } from './primitives.ts'

/** `ogee.size/1`: reach, step and bits that a design needs against what it has. Readers ignore keys that they do not know. */

export const sizeVerdict = z.enum(['covers', 'short', 'coarse', 'both'])
const span = z.object({ bits: z.int(), lowV: finite, highV: finite })

const adjusterSize = z.object({
  requiredLowV: finite,
  requiredHighV: finite,
  requiredStepV: finite,
  requiredBits: z.int(),
  recommended: span.nullable(),
  available: span.extend({ stepV: finite, outputStepV: finite }),
  reachMargin: finite.nullable(),
  stepMargin: finite,
  spareBits: z.int(),
  verdict: sizeVerdict,
  tighterSide: z.enum(['low', 'high']).nullable(),
  limitedBy: z.enum(['codes', 'node']).nullable(),
  reachSpareBits: finite.nullable(),
  stepSpareBits: finite,
  nominalV: finite,
  outputPerV: finite,
  centreV: finite,
  reachBeforeMarginV: finite,
  requiredReachOutputV: finite,
  availableReachOutputV: finite,
  effectTolerance: finite,
})

const extents = z.object({
  gain: z.object({ centrePpm: finite, worstCasePpm: finite, rssPpm: finite, usedPpm: finite }),
  offset: z.object({ centreV: finite, worstCaseV: finite, rssV: finite, usedV: finite }),
  from: z.enum(['budget', 'measured-units']),
  units: z.int().nullable(),
  toleranceFactor: finite.nullable(),
})

const residualLine = z.object({
  name: z.string(),
  worstV: finite,
  standardV: finite,
  worstLsb: finite,
  worstPpm: finite,
  share: finite,
  path: z.enum(['gain', 'offset', 'neither']),
  kind: z.enum([
    'quantising',
    'auxiliary-inl',
    'auxiliary-drift',
    'measurement',
    'instrument',
    'converter-inl',
    'budget',
    'not-trimmed',
  ]),
  biasV: finite,
})

export const sizeDocument = z
  .object({
    format: z.literal('ogee.size/1'),
    solver: z.string(),
    range: z.string(),
    lsbV: finite,
    targetV: finite,
    extents,
    adjusters: z.object({ gain: adjusterSize.optional(), offset: adjusterSize.optional() }),
    residual: z.object({
      lines: z.array(residualLine),
      worstCaseV: finite,
      rssV: finite,
      worstCaseLsb: finite,
      rssLsb: finite,
      worstCasePpm: finite,
      rssPpm: finite,
      atV: finite,
    }),
    passes: z.object({ withNominalEffect: z.int().nullable(), withMeasuredEffect: z.int().nullable() }),
    verdict: sizeVerdict,
    combine: z.enum(['worst-case', 'rss']),
    margin: finite,
    remarks: z.array(z.object({ path: z.string(), message: z.string() })),
  })
  .meta({ id: 'Size' })
export type SizeDocument = z.output<typeof sizeDocument>

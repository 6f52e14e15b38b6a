import * as z from 'zod'
import { limits } from '../limits.ts'
import { checkDesign } from './design-check.ts'
import { channel, code, coding, finite, method, notNegative, positive, rangeId } from './primitives.ts'

/** The design document `ogee.design/1`. Unknown keys are refused by name; any new key makes `ogee.design/2`. */

const measuredEffect = z.strictObject({
  kind: z.literal('measured'),
  slopePerV: finite.default(0).describe('β, 1/V: change of slope per volt at the node'),
  offsetPerV: finite.default(0).describe('α, V/V: change of output at the offset point per volt at the node'),
})
const referenceSumming = z.strictObject({
  kind: z.literal('reference-summing'),
  inputOhm: positive,
  adjustOhm: positive,
  referenceV: finite.refine((v) => v !== 0, 'The reference voltage cannot be 0 V.'),
  inverting: z.boolean(),
  pivotV: finite.default(0),
})
const outputSumming = z.strictObject({
  kind: z.literal('output-summing'),
  feedbackOhm: positive,
  adjustOhm: positive,
  inverting: z.boolean(),
})
export const effect = z.discriminatedUnion('kind', [measuredEffect, referenceSumming, outputSumming])

const node = z.strictObject({
  nominalV: finite.default(0),
  minV: finite.optional(),
  maxV: finite.optional(),
  inputOhm: positive.optional(),
  returnV: finite.default(0),
})

const source = z.strictObject({
  bits: z.int().min(limits.sourceBitsMin).max(limits.sourceBitsMax),
  coding,
  lowV: finite,
  highV: finite,
  inlLsb: notNegative.optional(),
  driftPpmPerK: notNegative.optional(),
  spanTolerance: z.number().min(0).lt(1).optional(),
})

export const network = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('direct') }),
  z.strictObject({ kind: z.literal('divider'), topOhm: positive, bottomOhm: positive }),
  z.strictObject({
    kind: z.literal('shifted'),
    topOhm: positive,
    shiftOhm: positive,
    shiftV: finite,
    bottomOhm: positive.optional(),
  }),
])

const adjuster = z.strictObject({
  effect,
  effectTolerance: z.number().min(0).lt(1).default(0),
  node,
  source,
  network,
})

const range = z.strictObject({
  id: rangeId,
  label: z.string().min(1).max(limits.labelMax).optional(),
  lowV: finite,
  highV: finite,
  offsetAt: z.enum(['zero-volts', 'low-end']).default('zero-volts'),
  effects: z.strictObject({ gain: effect.optional(), offset: effect.optional() }).optional(),
  sharedWith: z.array(rangeId).max(limits.rangesMax).optional(),
})

const lineShape = {
  name: z.string().min(1).max(limits.labelMax),
  distribution: z.enum(['rectangular', 'triangular', 'arcsine', 'normal']),
  k: positive.optional(),
  when: z.enum(['initial', 'drift', 'noise']),
}
const gainLine = z.strictObject({
  ...lineShape,
  limitPpm: notNegative,
  nominalPpm: finite.optional(),
  pivotV: finite.optional(),
})
const offsetLine = z.strictObject({ ...lineShape, limitV: notNegative, nominalV: finite.optional() })

const limitWithUnit = z.strictObject({ value: positive, unit: z.enum(['LSB', 'ppm', 'V']) })

const measurement = z.strictObject({
  method: method.default('best-fit'),
  points: z.array(code).min(2).max(limits.planPointsMax),
  readings: z.int().min(1).max(limits.readingsMax).optional(),
  noiseV: positive.optional(),
  resolutionV: positive.optional(),
  plausiblePercent: positive.max(100).default(5),
  settleLimitLsb: positive.default(0.25),
  instrument: z.strictObject({ gainPpm: notNegative, offsetV: notNegative }).optional(),
})

export const designDocument = z
  .strictObject({
    format: z.literal('ogee.design/1'),
    title: z.string().min(1).max(limits.titleMax),
    converter: z.strictObject({
      bits: z.int().min(limits.converterBitsMin).max(limits.converterBitsMax),
      coding,
      inlLsb: notNegative.optional(),
    }),
    channels: z.array(channel).min(1).max(limits.channelsMax).default(['1']),
    ranges: z.array(range).min(1).max(limits.rangesMax),
    adjusters: z.strictObject({ gain: adjuster.optional(), offset: adjuster.optional() }),
    budget: z
      .strictObject({
        gain: z.array(gainLine).max(limits.budgetLinesMax).default([]),
        offset: z.array(offsetLine).max(limits.budgetLinesMax).default([]),
      })
      .optional(),
    sizing: z
      .strictObject({
        combine: z.enum(['worst-case', 'rss']).default('worst-case'),
        margin: notNegative.default(0.25),
        temperatureSpanK: notNegative.default(0),
      })
      .optional(),
    target: z.strictObject({ residual: limitWithUnit }),
    measurement,
    decision: z.strictObject({ rule: z.enum(['simple', 'guarded']), tolerance: limitWithUnit }).optional(),
  })
  .superRefine(checkDesign)
  .meta({ id: 'Design' })

/** A design as everything downstream sees it: parsed, checked, defaults filled in. */
export type Design = z.output<typeof designDocument>

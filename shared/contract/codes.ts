import * as z from 'zod'
import { code, codePair, finite, method, verdict } from './primitives.ts'

/** `ogee.fit/1` and `ogee.codes/1`: what the solver answers. Readers ignore keys that they do not know. */

const perAdjuster = <T extends z.ZodType>(value: T) =>
  z.object({ gain: value.optional(), offset: value.optional() })

const residual = z.object({
  code,
  idealV: finite,
  measuredV: finite,
  errorV: finite,
  residualV: finite,
  residualLsb: finite,
})

export const flag = z.object({
  flag: z.enum(['outlier', 'bow', 'unsettled', 'narrow', 'inconsistent', 'effect-off']),
  code: code.nullable(),
  value: finite.nullable(),
  limit: finite.nullable(),
  unit: z.string().nullable(),
})

export const fit = z.object({
  method,
  n: z.int(),
  dof: finite.nullable(),
  dofWhy: z.enum(['known-u', 'two-points', 'minimax', 'terminal']).nullable(),
  offsetErrorV: finite,
  gainErrorPpm: finite,
  fullScaleErrorV: finite,
  standardUncertainty: z.object({ offsetV: finite, gainPpm: finite, covarianceVPpm: finite }).nullable(),
  expandedUncertainty: z
    .object({ offsetV: finite, gainPpm: finite, kOffset: finite, kGain: finite })
    .nullable(),
  residuals: z.array(residual),
  linearity: z.object({ maxV: finite, maxLsb: finite, maxPpm: finite, atCode: code }),
  chiSquared: finite.nullable(),
  instrument: z.object({ id: z.string().nullable(), gainPpm: finite, offsetV: finite }).nullable(),
  flags: z.array(flag),
  notes: z.array(z.string()),
})

const usedEffect = z.object({
  slopePerV: finite,
  offsetPerV: finite,
  tolerance: finite,
  source: z.enum(['design', 'learned']),
  factor: finite,
  why: z.string().nullable(),
})

const predicted = z.object({
  offsetErrorV: finite,
  gainErrorPpm: finite,
  worstV: finite,
  worstLsb: finite,
  worstPpm: finite,
  atV: finite,
  expandedUncertaintyV: finite.nullable(),
  effectV: finite.describe('What the tolerances of the effects may add at the worse end, V'),
})

/** What these codes do to a range that shares the hardware; `predicted` is null when that range was not measured. */
const sharedLine = z.object({
  range: z.string(),
  change: z.object({ offsetErrorV: finite, gainErrorPpm: finite }),
  predicted: z.object({ offsetErrorV: finite, gainErrorPpm: finite, worstV: finite, atV: finite }).nullable(),
})

const missing = z.object({
  wantedV: finite,
  limitV: finite,
  by: z.enum(['codes', 'node']),
  nearestCode: code.nullable(),
})

export const trim = z.object({
  verdict,
  reasons: z.array(z.string()),
  codes: codePair.nullable(),
  words: perAdjuster(z.string()).nullable(),
  nodeV: perAdjuster(finite).nullable(),
  exactNodeV: perAdjuster(finite),
  appliedNodeV: perAdjuster(finite),
  effects: perAdjuster(usedEffect),
  reachUsed: perAdjuster(finite.nullable()),
  shortfall: perAdjuster(missing).extend({ remainingWorstV: finite }).nullable(),
  predicted: predicted.nullable(),
  notes: z.array(z.string()),
  shared: z.array(sharedLine).optional(),
})

const head = { solver: z.string(), range: z.string() }
export const fitDocument = z.object({ format: z.literal('ogee.fit/1'), ...head, fit }).meta({ id: 'Fit' })
export const codesDocument = z
  .object({ format: z.literal('ogee.codes/1'), ...head, fit, trim })
  .meta({ id: 'Codes' })
export type FitDocument = z.output<typeof fitDocument>
export type CodesDocument = z.output<typeof codesDocument>

import * as z from 'zod'
import { fit } from './codes.ts'
import { code, finite, outcome } from './primitives.ts'

const judged = z.object({
  code,
  idealV: finite,
  measuredV: finite,
  errorV: finite,
  errorLsb: finite,
  expandedUncertaintyV: finite.nullable(),
  outcome,
  conformanceProbability: finite.nullable(),
})

/** `ogee.verify/1`: as-left points against the tolerance (JCGM 106:2012). */
export const verifyDocument = z
  .object({
    format: z.literal('ogee.verify/1'),
    solver: z.string(),
    range: z.string(),
    rule: z.enum(['simple', 'guarded']),
    toleranceV: finite,
    tur: finite.nullable(),
    outcome,
    points: z.array(judged),
    worst: z.object({ code, errorV: finite, errorLsb: finite }),
    fit: fit.nullable(),
    notes: z.array(z.string()).describe('Such as tur-under-4, guard-band-too-wide'),
  })
  .meta({ id: 'Verify' })
export type VerifyDocument = z.output<typeof verifyDocument>

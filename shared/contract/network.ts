import * as z from 'zod'
import { network } from './design.ts'
import { finite } from './primitives.ts'

/** `ogee.network/1`: resistor values between the auxiliary DAC and the node, out of a preferred series. */

export const series = z.enum(['E24', 'E96', 'E192'])

const candidate = z.object({
  network,
  nodeLowV: finite,
  nodeHighV: finite,
  cornerLowV: finite,
  cornerHighV: finite,
  stepV: finite,
  cornerStepV: finite,
  lostBits: finite,
  sourceOhm: finite,
  dacCurrentA: finite,
})

export const networkDocument = z
  .object({
    format: z.literal('ogee.network/1'),
    solver: z.string(),
    adjuster: z.enum(['gain', 'offset']),
    series,
    tolerance: finite,
    wantedLowV: finite,
    wantedHighV: finite,
    maxSourceOhm: finite.nullable(),
    maxCurrentA: finite.nullable(),
    candidates: z.array(candidate),
    obstacle: z.string().nullable(),
    own: candidate.nullable(),
  })
  .meta({ id: 'NetworkValues' })
export type NetworkDocument = z.output<typeof networkDocument>

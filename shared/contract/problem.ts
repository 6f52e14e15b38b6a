import * as z from 'zod'
import { type ErrorCode, errorTable } from '../errors.ts'

const code = z.enum(Object.keys(errorTable) as [ErrorCode, ...ErrorCode[]])

/** RFC 9457 problem details. `type` is `/problems/<code>` and never changes; branch on `code`. */
export const problem = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.int(),
    detail: z.string(),
    code,
    instance: z.string().optional(),
    errors: z.array(z.object({ path: z.string(), message: z.string() })).optional(),
    facts: z.record(z.string(), z.union([z.string(), z.number(), z.boolean(), z.null()])).optional(),
    exit: z.int().optional().describe('Exit code, on the command line only'),
  })
  .meta({ id: 'Problem' })
export type Problem = z.output<typeof problem>

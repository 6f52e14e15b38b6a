import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint } from './endpoint.ts'
import { problem } from './problem.ts'
import { record, recordRequest } from './record.ts'

/** Chosen by the client: the same key and body again give the first answer. */
export const idempotencyKey = z
  .string()
  .max(limits.idempotencyKeyMax)
  .regex(/^[\x21-\x7e]+$/, 'Use printable ASCII without spaces.')

/** A line of a block: the body of `POST /trims` and its idempotency key. */
export const batchLine = recordRequest.extend({ key: idempotencyKey }).meta({ id: 'BatchLine' })

const about = {
  line: z.int().positive().describe('Line of the block, from 1'),
  key: z.string().nullable().describe('Null when the line could not be read'),
}

/** What became of one line: recorded (or recorded before), or refused for a reason of its own. */
export const batchOutcome = z.union([
  z.object({ ...about, status: z.literal(201), record }),
  z.object({ ...about, status: z.int(), problem }),
])
export type BatchOutcome = z.output<typeof batchOutcome>

/** The last line. An answer without it was cut: send the block again, nothing is doubled. */
export const batchEnd = z.object({
  end: z.literal(true),
  lines: z.int().nonnegative(),
  recorded: z.int().nonnegative(),
  replayed: z.int().nonnegative().describe('Recorded by an earlier request with the same key and body'),
  refused: z.int().nonnegative(),
})
export type BatchEnd = z.output<typeof batchEnd>

export const batchAnswer = z.union([batchEnd, batchOutcome]).meta({ id: 'BatchAnswer' })
export type BatchAnswer = z.output<typeof batchAnswer>

/** Records a block of measurements; each line has an outcome of its own and is all or nothing. */
export const postBatch = endpoint({
  id: 'recordBatch',
  method: 'POST',
  path: '/batches',
  summary: 'Record up to 1,000 lines, each with an outcome of its own, answered in their order',
  access: { roles: ['engineer', 'operator'], scopes: ['trims:write'] },
  body: batchLine,
  ndjson: true,
  reply: { status: 200, schema: batchAnswer },
  refusals: [],
})

import * as z from 'zod'
import { receipt } from '../../shared/contract/receipt.ts'
import { recordRequest } from '../../shared/contract/record.ts'
import { OgeeError } from '../../shared/errors.ts'
import { parseJson } from '../files.ts'
import type { RequestBody } from '../request.ts'

/** What a spool keeps of one measurement: the request with its key, and what was given out for it. */
const spooled = z.object({
  format: z.literal('ogee.spooled/1'),
  key: z.string().min(1),
  savedAt: z.string(),
  /** As it will be sent; checked again by whoever takes it. */
  body: z.custom<RequestBody>((value) => recordRequest.safeParse(value).success, 'This is no request.'),
  /** The object that was printed. */
  printed: z.looseObject({}),
  /** Once it is sent: the server's promise, and how the record is known there. */
  receipt: receipt.optional(),
  sent: z.object({ id: z.string(), number: z.int(), verdict: z.string().nullable() }).optional(),
})
export type Entry = z.output<typeof spooled>

export function readEntry(text: string, name: string): Entry {
  const parsed = spooled.safeParse(parseJson(text, name))
  if (parsed.success) return parsed.data
  const { path, message } = parsed.error.issues[0] ?? { path: [], message: 'it does not match' }
  throw new OgeeError('invalid-document', `${name} is no entry of a spool: /${path.join('/')}: ${message}`)
}

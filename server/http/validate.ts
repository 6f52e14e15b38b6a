import type * as z from 'zod'
import { issueWords } from '../../shared/contract/issue-words.ts'
import { type FieldError, OgeeError } from '../../shared/errors.ts'

/** Parses by the endpoint's schema; a breach is 422 with every bad field by JSON pointer. */
export function validate<Schema extends z.ZodType>(
  schema: Schema,
  value: unknown,
  part: 'body' | 'query' | 'path',
): z.output<Schema> {
  const parsed = schema.safeParse(value, { error: issueWords })
  if (parsed.success) return parsed.data
  const errors = parsed.error.issues.flatMap(fieldErrors).slice(0, 100)
  const first = errors[0]
  const place = part === 'body' ? 'body' : `${part} parameters`
  throw new OgeeError(
    'invalid-request',
    first ? `In the ${place} at ${first.path || '/'}: ${first.message}` : `The ${place} are not as agreed.`,
    { errors },
  )
}

function fieldErrors(issue: z.core.$ZodIssue): FieldError[] {
  const path = pointer(issue.path)
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => ({
      path: `${path}${pointer([key])}`,
      message: `There is no field ${key.slice(0, 80)}.`,
    }))
  }
  return [{ path, message: issue.message }]
}

const pointer = (path: readonly PropertyKey[]) =>
  path.map((part) => `/${String(part).slice(0, 80).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('')

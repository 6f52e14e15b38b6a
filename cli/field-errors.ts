import type * as z from 'zod'
import type { FieldError } from '../shared/errors.ts'

/** An issue of a schema as bad fields: a JSON pointer each, and for unknown keys one line by name. */
export function fieldErrors(issue: z.core.$ZodIssue): FieldError[] {
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => ({
      path: pointer([...issue.path, key]),
      message: `The key ${JSON.stringify(key)} is not known here.`,
    }))
  }
  return [{ path: pointer(issue.path) || '/', message: issue.message }]
}

const pointer = (path: readonly PropertyKey[]) =>
  path.map((part) => `/${String(part).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('')

import { codesDocument } from '../shared/contract/codes.ts'
import { OgeeError } from '../shared/errors.ts'
import { limits } from '../shared/limits.ts'
import type { PreviousPass } from '../shared/solver/learn.ts'
import { parseJson, readFileText } from './files.ts'

/** The pass before: an `ogee.codes/1`, or a record whose `result` is one. */
export async function readPrevious(path: string): Promise<PreviousPass> {
  const { text } = await readFileText(
    path,
    limits.batchMaxBytes,
    () => new OgeeError('invalid-document', `${path} is over 8 MiB; one result is smaller.`),
  )
  return previousFrom(parseJson(text, path), path)
}

export function previousFrom(parsed: unknown, name: string): PreviousPass {
  const isRecord = typeof parsed === 'object' && parsed !== null && 'result' in parsed
  const checked = codesDocument.safeParse(isRecord ? parsed.result : parsed)
  if (checked.success) return checked.data
  throw new OgeeError(
    'invalid-document',
    `${name} holds no result of a trim: give what \`ogee codes\` or \`ogee trim\` printed as JSON.`,
  )
}

import { type Design, designDocument } from '../shared/contract/design.ts'
import { issueWords } from '../shared/contract/issue-words.ts'
import { OgeeError } from '../shared/errors.ts'
import type { Json } from '../shared/ledger/canonical.ts'
import { limits } from '../shared/limits.ts'
import { fieldErrors } from './field-errors.ts'
import { parseJson, readText } from './files.ts'
import type { Io } from './io.ts'

/** Reads and checks a design document; every bad field is named by its JSON pointer. */
export async function readDesign(io: Io, path: string): Promise<Design> {
  return designFrom(await readDesignJson(io, path), path)
}

/** The same, and what stands in the file: without the defaults that the schema fills in. */
export async function readDesignAsSent(io: Io, path: string): Promise<{ design: Design; sent: Json }> {
  const sent = await readDesignJson(io, path)
  return { design: designFrom(sent, path), sent: sent as Json }
}

async function readDesignJson(io: Io, path: string): Promise<unknown> {
  const text = await readText(
    io,
    path,
    limits.bodyMaxBytes,
    () => new OgeeError('invalid-document', `${path} is over 1 MiB. A design document is smaller.`),
  )
  return parseJson(text.replace(/^\uFEFF/, ''), path)
}

/** The design in a parsed document that came from `name`. */
export function designFrom(parsed: unknown, name: string): Design {
  refuseOtherFormats(parsed, name)
  const checked = designDocument.safeParse(parsed, { error: issueWords })
  if (checked.success) return checked.data
  const errors = checked.error.issues.flatMap(fieldErrors)
  const first = errors[0]
  throw new OgeeError(
    'invalid-document',
    `${name} is not a design document at ${first?.path}: ${first?.message}`,
    { errors },
  )
}

function refuseOtherFormats(parsed: unknown, name: string): void {
  const format =
    typeof parsed === 'object' && parsed !== null && 'format' in parsed ? parsed.format : undefined
  if (typeof format !== 'string' || format === 'ogee.design/1') return
  const isNewer = /^ogee\.design\/\d+$/.test(format)
  throw new OgeeError(
    'unknown-format',
    isNewer
      ? `${name} has format ${format}; this version of ogee reads ogee.design/1. Take a newer ogee.`
      : `${name} has format ${format}; a design document has ogee.design/1.`,
    {
      facts: { format, reads: 'ogee.design/1' },
      errors: [{ path: '/format', message: 'Only ogee.design/1 is read.' }],
    },
  )
}

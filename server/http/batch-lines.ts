import { batchLine } from '../../shared/contract/batches.ts'
import type { RecordRequest } from '../../shared/contract/record.ts'
import { OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import { parseJson } from './json-body.ts'
import { validate } from './validate.ts'

/** A line of a block that is not blank, as bytes; its number counts blank ones too. */
export type RawLine = { line: number; bytes: Buffer }

/** One line as read: what it asks for, or why it cannot be taken; the key as far as it has one. */
export type ReadLine =
  | { line: number; key: string; asked: { request: RecordRequest; rawBody: unknown; key: string } }
  | { line: number; key: string | null; asked: null; error: unknown }

const newline = 10

/** @throws body-too-large when there are too many lines */
export function linesOf(block: Buffer): RawLine[] {
  const lines: RawLine[] = []
  let line = 0
  for (let from = 0; from < block.length; line++) {
    const at = block.indexOf(newline, from)
    const to = at < 0 ? block.length : at
    const bytes = block.subarray(from, to)
    if (!isBlank(bytes)) lines.push({ line: line + 1, bytes })
    from = to + 1
    if (lines.length > limits.batchMaxLines) {
      throw new OgeeError(
        'body-too-large',
        `A block has at most ${limits.batchMaxLines} lines. Send the rest in another one.`,
      )
    }
  }
  return lines
}

const isBlank = (bytes: Buffer) => bytes.every((byte) => byte === 32 || byte === 9 || byte === 13)

/** Reads one line by the same bounds and the same schema as the body of `POST /trims`. */
export function readLine({ line, bytes }: RawLine): ReadLine {
  let key: string | null = null
  try {
    if (bytes.length > limits.bodyMaxBytes) throw new OgeeError('body-too-large', 'The line is over 1 MiB.')
    const value = parseJson(bytes)
    const { key: given, ...rawBody } = (value ?? {}) as { key?: unknown }
    if (typeof given === 'string') key = given.slice(0, limits.idempotencyKeyMax)
    const { key: checked, ...request } = validate(batchLine, value, 'body')
    return { line, key: checked, asked: { request, rawBody, key: checked } }
  } catch (error) {
    return { line, key, asked: null, error }
  }
}

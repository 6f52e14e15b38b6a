import type { Record as StoredRecord } from '../../shared/contract/record.ts'
import { type ErrorCode, OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import type { AnyRecord } from '../record-rendering.ts'
import { defaultKey, type RequestBody } from '../request.ts'
import { problemDocument } from '../trouble.ts'

/** A problem document as it is printed; the server's may be of a newer version, so its code is any text. */
export type Problem = { code: string; detail: string; status: number; [more: string]: unknown }
export type Outcome = { exit: number; record: AnyRecord | StoredRecord } | { exit: number; problem: Problem }

/** One measurement of the input, or one thing that is wrong with it; in the order of the input. */
export type Item = {
  /** Line of the input where it starts. */
  line: number
  unit: string | null
  channel: string | null
  range: string | null
  /** What is to be sent; null when nothing is. */
  send: { body: RequestBody; key: string; text: string } | null
  outcome: Outcome | null
}

export type Place = Pick<Item, 'line'> & { unit?: unknown; channel?: unknown; range?: unknown }

/** A measurement that is ready to be sent; when it cannot be, an item that says why. */
export async function itemOf(place: Place, make: () => RequestBody, key?: string): Promise<Item> {
  try {
    const body = make()
    const own = key ?? (await defaultKey(body))
    const text = JSON.stringify({ key: own, ...body })
    if (Buffer.byteLength(text) > limits.bodyMaxBytes)
      throw new OgeeError('body-too-large', 'The measurement is over 1 MiB as JSON.')
    return { ...named(place), send: { body, key: own, text }, outcome: null }
  } catch (error) {
    if (!(error instanceof OgeeError)) throw error
    return { ...named(place), send: null, outcome: refused(atLine(error, place.line)) }
  }
}

/** Something that is wrong with the input at a place that its message names. */
export function badItem(place: Place, code: ErrorCode, message: string, column: string | null): Item {
  const path = column === null ? `line ${place.line}` : `line ${place.line}, ${column}`
  const trouble = new OgeeError(code, message, { errors: [{ path, message }] })
  return { ...named(place), send: null, outcome: refused(trouble) }
}

export const refused = (trouble: OgeeError): Outcome => ({
  exit: trouble.exit,
  problem: problemDocument(trouble) as Problem,
})

function named({ line, unit, channel, range }: Place) {
  const text = (value: unknown) => (typeof value === 'string' ? value : null)
  return { line, unit: text(unit), channel: text(channel), range: text(range) }
}

function atLine({ code, message, errors, facts }: OgeeError, line: number): OgeeError {
  return new OgeeError(code, `Line ${line}: ${message}`, { errors, facts })
}

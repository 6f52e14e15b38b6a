import { OgeeError } from '../../shared/errors.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { limits } from '../../shared/limits.ts'
import type { RequestBody } from '../request.ts'
import { badItem, type Item, itemOf, type Place } from './item.ts'
import { SeenUnits } from './seen-units.ts'

/** Lines of a text that comes in pieces, with their numbers. A line that never ends is cut off and marked. */
export async function* numberedLines(
  pieces: AsyncIterable<string>,
): AsyncGenerator<{ line: number; text: string; tooLong: boolean }[]> {
  let rest = ''
  let line = 0
  let overflown = false
  for await (const piece of pieces) {
    const texts = (rest + piece).split('\n')
    rest = texts.pop() ?? ''
    const lines = texts.map((text) => {
      const tooLong = overflown
      overflown = false
      line += 1
      return { line, text: tooLong ? '' : text, tooLong }
    })
    if (rest.length > lineMax) {
      rest = ''
      overflown = true
    }
    yield lines
  }
  if (rest.trim() !== '' || overflown) yield [{ line: line + 1, text: rest, tooLong: overflown }]
}

/** Characters. More cannot be sent anyway. */
const lineMax = 2 * limits.bodyMaxBytes

/** Measurements of NDJSON: bodies of `POST /trims` with a `key` if they like; flags complete them. */
export async function* ndjsonItems(
  pieces: AsyncIterable<string>,
  bodyOf: (line: Json) => RequestBody,
): AsyncGenerator<Item[]> {
  const seen = new SeenUnits()
  for await (const lines of numberedLines(pieces)) {
    const items: Item[] = []
    for (const { line, text, tooLong } of lines) {
      if (tooLong) items.push(badItem({ line }, 'body-too-large', `Line ${line}: it is over 1 MiB.`, null))
      else if (text.trim() !== '') items.push(await readItem(line, text, bodyOf, seen))
    }
    if (items.length > 0) yield items
  }
}

async function readItem(
  line: number,
  text: string,
  bodyOf: (line: Json) => RequestBody,
  seen: SeenUnits,
): Promise<Item> {
  let value: Json
  try {
    value = JSON.parse(text) as Json
  } catch {
    return badItem({ line }, 'malformed-json', `Line ${line}: it is not JSON.`, null)
  }
  const { key, ...rest } = (value ?? {}) as { readonly key?: Json; readonly [name: string]: Json | undefined }
  const place: Place = { ...rest, line }
  if (key !== undefined && (typeof key !== 'string' || !/^[\x21-\x7e]{1,128}$/.test(key))) {
    const message = `Line ${line}: key takes 1 to 128 visible ASCII characters without spaces.`
    return badItem(place, 'invalid-request', message, 'key')
  }
  return await itemOf(
    place,
    () => {
      const body = bodyOf(Array.isArray(value) ? value : (rest as Json))
      refuseDouble(body, key, line, seen)
      return body
    },
    key,
  )
}

/** As in a CSV: the same measurement twice is a slip unless its key or its time says otherwise. */
function refuseDouble(body: RequestBody, key: string | undefined, line: number, seen: SeenUnits): void {
  const { kind, design, unit, channel, range, measuredAt, follows } = body
  const same = [kind, design, unit, channel, range, measuredAt, follows, key].map((part) => part ?? null)
  const first = seen.firstLine(JSON.stringify(same), line)
  if (first === undefined) return
  throw new OgeeError(
    'duplicate-unit',
    `unit ${unit} stands in line ${first} too. Give one of them another key.`,
  )
}

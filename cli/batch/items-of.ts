import { OgeeError } from '../../shared/errors.ts'
import { streamText } from '../files.ts'
import type { Io } from '../io.ts'
import { measuredFrom } from '../measurement.ts'
import { completedBody, flagsBody, requestBody } from '../request.ts'
import type { UnitOptions } from '../unit-options.ts'
import { csvItems } from './csv-items.ts'
import type { Item } from './item.ts'
import { ndjsonItems } from './ndjson-items.ts'

export type Input = 'csv' | 'ndjson'
/** What flags say of all measurements of a batch, and under which design they stand. */
export type Common = {
  options: UnitOptions
  design: string
  temperatureC: number | undefined
  kind: 'trim' | 'verify'
}

/** The measurements of a file or of standard input, as they come. */
export async function* itemsOf(
  io: Io,
  path: string,
  input: Input | undefined,
  { options, design, temperatureC, kind }: Common,
): AsyncGenerator<Item[]> {
  const { kind: format, pieces } = await recognised(streamText(io, path), input)
  if (format === 'ndjson') {
    const flags = flagsBody(options, design, temperatureC, kind)
    yield* ndjsonItems(pieces, (line) => completedBody(line, flags))
  } else {
    yield* csvItems(pieces, {
      unitRequired: options.unit === undefined,
      bodyOf: (group) => requestBody(options, design, measuredFrom(group, options), temperatureC, kind),
    })
  }
}

/** Characters without any text, after which the input is taken for a CSV, whose reader says what is missing. */
const startMax = 1024 * 1024

/** No header row of a points CSV starts with a brace, and every line of NDJSON does. */
async function recognised(
  pieces: AsyncGenerator<string>,
  asked: Input | undefined,
): Promise<{ kind: Input; pieces: AsyncIterable<string> }> {
  let start = ''
  while (start.trim() === '' && start.length < startMax) {
    const { value, done } = await pieces.next()
    if (done) throw new OgeeError('csv-empty', 'The input is empty. It needs measurements.')
    start += value
  }
  const found = /^\ufeff?\s*\{/.test(start) ? 'ndjson' : 'csv'
  if (asked !== 'csv' && /^\ufeff?\s*\[/.test(start)) {
    throw new OgeeError(
      'malformed-json',
      'The input begins with [, as a JSON array does. Write one object a line instead (NDJSON).',
    )
  }
  return { kind: asked ?? found, pieces: continued(start, pieces) }
}

async function* continued(start: string, pieces: AsyncIterable<string>): AsyncGenerator<string> {
  yield start
  yield* pieces
}

import { OgeeError } from '../shared/errors.ts'
import { limits } from '../shared/limits.ts'
import { splitCsv } from '../shared/points/split-csv.ts'
import type { Place } from '../shared/simulate/unit.ts'
import { readFileText } from './files.ts'

type Codes = { gain?: number; offset?: number }

/**
 * The codes that a batch gave out, by unit, channel and range: the CSV of `ogee batch` or `ogee lot codes`. A place
 * without codes (out of reach) is not in it.
 */
export async function readCodes(path: string): Promise<(place: Place) => Codes | null> {
  const tooLarge = () => new OgeeError('csv-too-large', `${path} is over ${mostBytes / 1024 / 1024} MiB.`)
  const { rows } = splitCsv((await readFileText(path, mostBytes, tooLarge)).text)
  const [head, ...lines] = rows
  const at = (name: string) => head?.cells.findIndex((cell) => cell.trim() === name) ?? -1
  const column = { unit: at('unit'), channel: at('channel'), range: at('range') }
  const codes = { gain: at('gain_code'), offset: at('offset_code') }
  if (column.unit < 0 || (codes.gain < 0 && codes.offset < 0)) {
    throw new OgeeError('csv-header', `${path} needs the columns unit, and gain_code or offset_code.`)
  }
  const known = new Map<string, Codes>()
  for (const { cells, line } of lines) {
    const cell = (i: number) => (i < 0 ? '' : (cells[i] ?? '').trim())
    const pair: Codes = {}
    for (const which of ['gain', 'offset'] as const) {
      const text = cell(codes[which])
      if (text === '') continue
      if (!/^\d{1,8}$/.test(text)) {
        throw new OgeeError('csv-cell', `${path}, line ${line}: ${text} is no code.`)
      }
      pair[which] = Number(text)
    }
    if (Object.keys(pair).length > 0) {
      known.set(keyOf(cell(column.unit), cell(column.channel), cell(column.range)), pair)
    }
  }
  return ({ unit, channel, range }) => known.get(keyOf(unit, channel, range)) ?? null
}

const mostBytes = 20 * limits.benchCsvMaxBytes
const keyOf = (...parts: readonly string[]) => JSON.stringify(parts)

import { OgeeError } from '../../shared/errors.ts'
import type { CsvProblem, PointGroup } from '../../shared/points/group.ts'
import { PointsReader } from '../../shared/points/reader.ts'
import { ArithmeticNeeded } from '../../shared/points/row.ts'
import { CsvSplitter, type SplitRow } from '../../shared/points/split-stream.ts'
import { loadArithmetic } from '../arithmetic.ts'
import type { RequestBody } from '../request.ts'
import { badItem, type Item, itemOf } from './item.ts'
import { SeenUnits } from './seen-units.ts'

type Options = { unitRequired: boolean; bodyOf: (group: PointGroup) => RequestBody }

/** Measurements of a points CSV of any length, in its order, with what is wrong in it at its place. */
export async function* csvItems(pieces: AsyncIterable<string>, options: Options): AsyncGenerator<Item[]> {
  const splitter = new CsvSplitter()
  let reader: PointsReader | null = null
  const read = async (rows: readonly SplitRow[]): Promise<Item[]> => {
    for (const row of rows) {
      if (reader === null) reader = readerOf(row, splitter, options)
      else if (row.broken === undefined) await pushed(reader, row)
      else reader.refuseRow(row.line, row.broken)
    }
    return reader === null ? [] : await itemsOf(reader, options)
  }
  for await (const piece of pieces) {
    const items = await read(splitter.push(piece))
    if (items.length > 0) yield items
  }
  const items = await read(splitter.end())
  const last = reader as PointsReader | null
  if (last === null) throw new OgeeError('csv-empty', 'The CSV is empty. It needs a header row and points.')
  last.end()
  yield [...items, ...(await itemsOf(last, options))]
}

function readerOf(row: SplitRow, splitter: CsvSplitter, { unitRequired }: Options): PointsReader {
  if (row.broken !== undefined) throw new OgeeError('csv-quotes', row.broken)
  return new PointsReader(row, splitter.delimiter ?? ',', { unitRequired, seen: new SeenUnits() })
}

/** Arithmetic is loaded with the first cell that needs it. */
async function pushed(reader: PointsReader, row: Parameters<PointsReader['push']>[0]): Promise<void> {
  try {
    reader.push(row)
  } catch (error) {
    if (!(error instanceof ArithmeticNeeded)) throw error
    reader.giveArithmetic((await loadArithmetic()).evaluateQuantity)
    reader.push(row)
  }
}

async function itemsOf(reader: PointsReader, { bodyOf }: Options): Promise<Item[]> {
  const { groups, problems } = reader.take()
  const items = groups.map((group) =>
    itemOf({ line: group.firstLine, ...namesOf(group) }, () => bodyOf(group), group.key),
  )
  const all = [...(await Promise.all(items)), ...problems.map(problemItem)]
  return all.sort((a, b) => a.line - b.line)
}

function problemItem({ code, line, column, message, unit, channel, range }: CsvProblem): Item {
  return badItem({ line, unit, channel, range }, code, message, column)
}

const namesOf = ({ unit, channel, range }: PointGroup) => ({ unit, channel, range })

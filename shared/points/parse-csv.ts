import { OgeeError } from '../errors.ts'
import { type LoadArithmetic, loadArithmetic } from '../quantity/parse.ts'
import type { CsvProblem, PointGroup } from './group.ts'
import { PointsReader, type ReaderOptions } from './reader.ts'
import { ArithmeticNeeded, type CellOptions } from './row.ts'
import { splitCsv } from './split-csv.ts'

export type PointsCsv = { groups: PointGroup[]; problems: CsvProblem[] }
export type CsvOptions = ReaderOptions & { arithmetic?: CellOptions['arithmetic'] }

/**
 * A whole points CSV: measurements, and what is wrong with the others. A bad row costs its own measurement only.
 * @param text the file: comma, semicolon or tab; a decimal comma where the delimiter is not a comma; BOM; CRLF
 * @returns good groups in file order, and problems with line and column
 * @throws csv-empty, csv-header, csv-quotes; ArithmeticNeeded when a cell has arithmetic and none was given
 * @example parsePointsCsv('code,measured\n0,0.001\n4095,9.9').groups[0].points.length // 2
 */
export function parsePointsCsv(text: string, options: CsvOptions = {}): PointsCsv {
  const { rows, delimiter } = splitCsv(text)
  const reader = new PointsReader(rows[0]!, delimiter, options)
  if (options.arithmetic !== undefined) reader.giveArithmetic(options.arithmetic)
  if (rows.length === 1) {
    throw new OgeeError('csv-empty', 'The CSV has a header and no points.', {
      errors: [{ path: `line ${rows[0]!.line}`, message: 'No row follows the header.' }],
    })
  }
  for (let i = 1; i < rows.length; i++) reader.push(rows[i]!)
  reader.end()
  return reader.take()
}

/**
 * As `parsePointsCsv`, cells with arithmetic included; the arithmetic is loaded only when a cell needs it.
 * @throws as `parsePointsCsv`; arithmetic-unavailable
 */
export async function parsePointsCsvAsync(
  text: string,
  load: LoadArithmetic,
  options: ReaderOptions = {},
): Promise<PointsCsv> {
  try {
    return parsePointsCsv(text, options)
  } catch (error) {
    if (!(error instanceof ArithmeticNeeded)) throw error
    const { evaluateQuantity } = await loadArithmetic(load)
    return parsePointsCsv(text, { ...options, arithmetic: evaluateQuantity })
  }
}

/**
 * The only measurement of a file, for commands that take one.
 * @throws the file's first problem under its own code; csv-cell when there are several measurements
 */
export function onlyGroup({ groups, problems }: PointsCsv): PointGroup {
  const first = problems[0]
  if (first !== undefined) {
    throw new OgeeError(first.code, first.message, {
      errors: problems.map(({ line, column, message }) => ({
        path: column === null ? `line ${line}` : `line ${line}, ${column}`,
        message,
      })),
    })
  }
  if (groups.length !== 1) {
    const second = groups[1]
    const where = second === undefined ? '' : ` The second starts in line ${second.firstLine}.`
    throw new OgeeError(
      'csv-cell',
      `The file holds ${groups.length} measurements; one is taken here.${where}`,
    )
  }
  return groups[0]!
}

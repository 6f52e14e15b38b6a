import Papa from 'papaparse'
import { OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'

export type Delimiter = ',' | ';' | '\t'
export type CsvRow = {
  cells: string[] /** Line of the file on which the row starts, from 1. */
  line: number
}

/**
 * Splits CSV text (RFC 4180; comma, semicolon or tab; BOM; CR, LF or CRLF) into rows with their line numbers. Rows
 * without any text are left out.
 * @throws csv-empty, csv-quotes with the line
 * @example splitCsv('code,measured\n0,1').rows.length // 2
 */
export function splitCsv(text: string): { rows: CsvRow[]; delimiter: Delimiter } {
  const clean = text.replace(/^\ufeff/, '').replace(/\r\n?/g, '\n')
  if (clean.trim() === '')
    throw new OgeeError('csv-empty', 'The CSV is empty. It needs a header row and points.')
  const delimiter = delimiterOf(clean)
  const rows: CsvRow[] = []
  let line = 1
  let from = 0
  Papa.parse<string[]>(clean, {
    delimiter,
    newline: '\n',
    step: ({ data, errors, meta }) => {
      const broken = errors.find(({ type }) => type === 'Quotes')
      if (broken) refuseQuotes(line, broken.code === 'MissingQuotes')
      if (data.some((cell) => cell.trim() !== '')) rows.push({ cells: data, line })
      for (let i = from; i < meta.cursor; i++) if (clean.charCodeAt(i) === 10) line += 1
      from = meta.cursor
    },
  })
  return { rows, delimiter }
}

/** What is wrong with the quotes of a row. */
export function quotesSentence(line: number, open: boolean): string {
  return open
    ? `Line ${line}: a quote is opened and not closed.`
    : `Line ${line}: a quote stands in the wrong place. A quote inside a quoted cell is written twice.`
}

function refuseQuotes(line: number, open: boolean): never {
  const sentence = quotesSentence(line, open)
  throw new OgeeError('csv-quotes', sentence, { errors: [{ path: `line ${line}`, message: sentence }] })
}

/** The delimiter is the one that the header row has most of: no column name holds any of the three. */
export function delimiterOf(text: string): Delimiter {
  const header = text.split('\n').find((line) => line.trim() !== '') ?? ''
  const count = (mark: string): number => header.split(mark).length - 1
  const most = Math.max(count(','), count(';'), count('\t'))
  if (most === count('\t') && most > 0) return '\t'
  return most === count(';') && most > 0 ? ';' : ','
}

/**
 * Refuses a CSV that is too large for a page; the command line streams such files.
 * @param bytes size of the file
 * @throws csv-too-large
 * @example refuseLargeCsv(1000) // undefined
 */
export function refuseLargeCsv(bytes: number): void {
  if (bytes <= limits.benchCsvMaxBytes) return
  const have = Math.ceil(bytes / 1024 / 1024)
  const most = limits.benchCsvMaxBytes / 1024 / 1024
  throw new OgeeError(
    'csv-too-large',
    `The file has ${have} MB; ${most} MB are taken here. Use: ogee batch points.csv`,
  )
}

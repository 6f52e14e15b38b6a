import Papa from 'papaparse'
import { OgeeError } from '../errors.ts'
import { type CsvRow, type Delimiter, delimiterOf, quotesSentence } from './split-csv.ts'

/** A row, or a line that cannot be split into cells. */
export type SplitRow = (CsvRow & { broken?: undefined }) | { line: number; broken: string }

/** A cell with line ends in it is no longer than this; what is, is a quote that nobody closed. Characters. */
const rowMax = 256 * 1024

/**
 * Splits a CSV of any length piece by piece, as `splitCsv` does a whole one. A line with a quote in the wrong place costs
 * itself only: the next line is read afresh.
 * @example new CsvSplitter().push('code,measured\n0,1\n1,2').length // 2
 */
export class CsvSplitter {
  /** Known once the header row is. */
  delimiter: Delimiter | null = null
  private rest = ''
  private line = 1
  private begun = false
  /** In the rest of a line that was given up. */
  private skipping = false

  /** The rows that are complete with this piece; rows without any text are left out. */
  push(text: string): SplitRow[] {
    this.rest += this.begun ? text : text.replace(/^\ufeff/, '')
    this.begun ||= text !== ''
    return this.take(false)
  }

  /** The last row, which needs no line end. */
  end(): SplitRow[] {
    return this.take(true)
  }

  private take(last: boolean): SplitRow[] {
    // A CR at the end of a piece may be half of a line end.
    const held = !last && this.rest.endsWith('\r') ? '\r' : ''
    const text = this.rest.slice(0, this.rest.length - held.length).replace(/\r\n?/g, '\n')
    this.delimiter ??= this.delimiterOf(text, last)
    this.rest = this.skipping ? this.afterLine(text) : text
    const rows: SplitRow[] = []
    if (this.delimiter !== null) while (!this.split(this.delimiter, last, rows));
    this.rest += held
    return rows
  }

  /** The header is the first line with any text in it; it must be whole before it tells anything. */
  private delimiterOf(text: string, last: boolean): Delimiter | null {
    const start = text.search(/\S/)
    if (last || (start >= 0 && text.indexOf('\n', start) >= 0)) return delimiterOf(text)
    if (text.length <= rowMax) return null
    throw new OgeeError(
      'csv-header',
      'The first 256 KiB of the CSV hold no whole header row. It begins with one line that names the columns.',
    )
  }

  /** Splits what is there; false when a broken line was taken out and the rest waits to be split. */
  private split(delimiter: Delimiter, last: boolean, rows: SplitRow[]): boolean {
    const text = this.rest
    let from = 0
    let broken: 'open' | 'misplaced' | null = null
    const parser = new Papa.Parser({
      delimiter,
      newline: '\n',
      step: ({ data, errors, meta }: Papa.ParseStepResult<string[]>) => {
        const wrong = errors.find(({ type }) => type === 'Quotes')
        if (wrong) {
          broken = wrong.code === 'MissingQuotes' ? 'open' : 'misplaced'
          parser.abort()
          return
        }
        const cells = (data as unknown as string[][])[0] ?? []
        if (cells.some((cell) => cell.trim() !== '')) rows.push({ cells, line: this.line })
        for (let i = from; i < meta.cursor; i++) if (text.charCodeAt(i) === 10) this.line += 1
        from = meta.cursor
      },
    })
    parser.parse(text, 0, !last)
    this.rest = text.slice(from)
    if (broken === null && this.rest.length > rowMax) broken = 'open'
    if (broken === null) return true
    rows.push({ line: this.line, broken: quotesSentence(this.line, broken === 'open') })
    this.rest = this.afterLine(this.rest)
    return this.rest === ''
  }

  private afterLine(text: string): string {
    const end = text.indexOf('\n')
    this.skipping = end < 0
    if (end < 0) return ''
    this.line += 1
    return text.slice(end + 1)
  }
}

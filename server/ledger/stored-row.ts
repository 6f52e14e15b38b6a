import type { StoredRow } from '../../shared/contract/ledger-entries.ts'
import type { Cell } from '../db/sql.ts'

/** A time as the database writes it, as JSON. */
export const timeText = (time: string) => `"${time.slice(0, 10)}T${time.slice(11)}Z"`
/** What JSON says as the cell stands, strings in quotation marks. */
const plain = (cell: Cell) => JSON.stringify(cell)
const flag = (cell: Cell) => String(cell !== 0)
const time = (cell: Cell) => (cell === null ? 'null' : timeText(cell as string))

/** Members of a row in the order of a line: the column of `records`, and how its cell is written. */
const members = {
  id: ['id', plain],
  number: ['number', plain],
  kind: ['kind', plain],
  unit: ['unit', plain],
  channel: ['channel', plain],
  range: ['range_id', plain],
  lot: ['lot', plain],
  design: ['design', plain],
  revision: ['revision', plain],
  pass: ['pass', plain],
  follows: ['follows', plain],
  verdict: ['verdict', plain],
  accepted: ['accepted', flag],
  gainErrorPpm: ['gain_error_ppm', plain],
  offsetErrorV: ['offset_error_v', plain],
  gainCode: ['gain_code', plain],
  offsetCode: ['offset_code', plain],
  worstLsb: ['worst_lsb', plain],
  attempt: ['attempt', plain],
  by: ['by_name', plain],
  byId: ['by_id', plain],
  station: ['station', plain],
  measuredAt: ['measured_at', time],
  recordedAt: ['recorded_at', time],
  notices: ['notices', plain],
} as const satisfies Record<Exclude<keyof StoredRow, 'receipt'>, readonly [string, (cell: Cell) => string]>

const columns = Object.values(members).map(([column]) => column)
const writers = Object.entries(members).map(
  ([name, [, write]], i) => [`${i === 0 ? '{' : ','}"${name}":`, write] as const,
)

/** What is read of `records r` for `storedRowText`. */
export const storedColumns = [...columns, 'receipt_key', 'receipt_signature']
  .map((column) => `r.${column}`)
  .join(', ')

/** A `storedRow` of the contract as JSON, from its columns; `null` where there is no record. */
export function storedRowText(cells: readonly Cell[]): string {
  if (cells[0] === null) return 'null'
  let text = ''
  for (let i = 0; i < writers.length; i++) {
    const [mark, write] = writers[i]!
    text += mark + write(cells[i]!)
  }
  const [key, signature] = cells.slice(writers.length) as [string, Buffer]
  return `${text},"receipt":{"key":${plain(key)},"signature":"${signature.toString('base64')}"}}`
}

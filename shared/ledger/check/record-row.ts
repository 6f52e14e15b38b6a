import type { StoredRow } from '../../contract/ledger-entries.ts'
import type { RecordBody } from '../../contract/record.ts'

/**
 * Where a row of the table of records says something else than the record's own bytes.
 *
 * @param row as stored.
 * @param body of the leaf, parsed.
 * @returns the first field that differs, with both values; null when all agree. The codes of an override are those of the
 * record that it follows and stand in no bytes of its own; `attempt` counts other records and is not looked at here.
 * Throws nothing for a body of the format; whatever it throws for another means that it is no record.
 * Source: contract.md, Ledger.
 * @example rowDifference(row, body) // null
 */
export function rowDifference(row: StoredRow, body: RecordBody): string | null {
  const { result } = body
  const codes = (result?.format === 'ogee.codes/1' ? result.trim.codes : null) ?? {}
  const worst = result?.format === 'ogee.codes/1' ? result.trim.predicted?.worstLsb : result?.worst.errorLsb
  const isOwn = body.kind !== 'override'
  const pairs: [keyof StoredRow, unknown][] = [
    ['id', body.id],
    ['number', body.number],
    ['kind', body.kind],
    ['unit', body.unit],
    ['channel', body.channel],
    ['range', body.range],
    ['lot', body.lot],
    ['design', body.design],
    ['revision', body.revision],
    ['pass', body.pass],
    ['follows', body.follows],
    ['verdict', body.verdict],
    ['accepted', body.accepted],
    ['gainErrorPpm', result?.fit?.gainErrorPpm ?? null],
    ['offsetErrorV', result?.fit?.offsetErrorV ?? null],
    ['gainCode', isOwn ? (codes.gain ?? null) : row.gainCode],
    ['offsetCode', isOwn ? (codes.offset ?? null) : row.offsetCode],
    ['worstLsb', worst ?? null],
    ['by', body.by.name],
    ['byId', body.by.id],
    ['station', body.station],
    ['recordedAt', body.recordedAt],
  ]
  for (const [name, value] of pairs) {
    // The database knows one zero only.
    if (row[name] !== value && !(row[name] === 0 && value === 0)) return saying(name, row[name], value)
  }
  const sameTime =
    row.measuredAt === body.measuredAt ||
    (row.measuredAt !== null &&
      body.measuredAt !== null &&
      Date.parse(row.measuredAt) === Math.trunc(Date.parse(body.measuredAt)))
  return sameTime ? null : saying('measuredAt', row.measuredAt, body.measuredAt)
}

const saying = (name: string, stored: unknown, hashed: unknown) =>
  `${name} is stored as ${String(stored)}, and was hashed as ${String(hashed)}`

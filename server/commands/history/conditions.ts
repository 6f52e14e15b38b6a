import type * as z from 'zod'
import type { recordFilters } from '../../../shared/contract/history.ts'
import { recordId } from '../../../shared/contract/primitives.ts'
import type { Sql, SqlParameter } from '../../db/sql.ts'
import { sqlTime } from '../../db/sql.ts'
import type { Sight } from '../../policies/may-see.ts'
import { findUnits, unitBegins } from './find-units.ts'

export type Filters = { [Name in keyof typeof recordFilters]?: z.output<(typeof recordFilters)[Name]> }

export type Piece = { sql: string; values: readonly SqlParameter[] }

/** An index by which one filter finds its records in order of time: for each alternative a stretch of it. */
export type Finder = { index: string; alternatives: readonly Piece[] }

/** A filter as SQL. `finder`: by which index; `implied`: an alternative of the finder says all that the filter says. */
export type Condition = { piece: Piece; finder?: Finder; implied?: boolean }

/** Bounds of time, which every index of History has behind its own column. */
export function timeOf({ from, to }: Filters): Piece[] {
  const day = (text: string) => text.length === 10
  const end = to === undefined || !day(to) ? to : new Date(Date.parse(to) + 86_400_000).toISOString()
  return [
    ...(from === undefined ? [] : [{ sql: 'recorded_at >= ?', values: [sqlTime(from)] }]),
    ...(end === undefined ? [] : [{ sql: 'recorded_at < ?', values: [sqlTime(end)] }]),
  ]
}

/**
 * What must hold of a record that is shown: the filters, and what the caller may see. In order of how few records
 * they usually leave. Null when nothing can match.
 */
export async function conditionsOf(sql: Sql, filters: Filters, sight: Sight): Promise<Condition[] | null> {
  const { unit, serial, lot, design, revision, by, kind, verdict, attempt, finding } = filters
  const stations = await stationsOf(sql, filters.station, sight)
  const designs = sight.designs === null ? design : narrowed(design, sight.designs)
  if (stations?.length === 0 || designs?.length === 0) return null
  const units = serial === undefined ? undefined : await unitsOf(sql, serial)
  if (units === null) return null
  return [
    ...(unit === undefined ? [] : [among('unit', [unit], 'records_unit')]),
    ...(units ?? []),
    ...(finding === undefined ? [] : [withFinding(finding)]),
    ...(lot ? [among('lot', lot, 'records_in_lot')] : []),
    ...(attempt === undefined ? [] : [atLeast(attempt)]),
    ...(stations ? [among('station_id', stations, 'records_station')] : []),
    ...(kind ? [among('kind', kind, 'records_kind')] : []),
    ...(by ? [among('by_id', by, 'records_by')] : []),
    ...(verdict ? [among('verdict', verdict, 'records_verdict')] : []),
    ...(designs ? [ofDesigns(designs, revision)] : []),
  ]
}

function among(column: string, values: readonly (string | number)[], index: string): Condition {
  return {
    piece: { sql: `${column} IN (?)`, values: [values] },
    finder: { index, alternatives: values.map((value) => ({ sql: `${column} = ?`, values: [value] })) },
    implied: true,
  }
}

function ofDesigns(designs: readonly string[], revision: number | undefined): Condition {
  if (revision === undefined) return among('design', designs, 'records_design')
  const alternatives = designs.map((key) => ({ sql: 'design = ? AND revision = ?', values: [key, revision] }))
  return {
    piece: { sql: 'design IN (?) AND revision = ?', values: [designs, revision] },
    finder: { index: 'records_revision', alternatives },
    implied: true,
  }
}

/** Findings are few beside records, so those lead to their records. */
function withFinding(finding: 'open' | 'any'): Condition {
  const open = 'WHERE NOT EXISTS (SELECT 1 FROM finding_answers c WHERE c.closes = f.id)'
  const sql = `id IN (SELECT f.record_id FROM findings f ${finding === 'open' ? open : ''})`
  const piece = { sql, values: [] }
  return { piece, finder: { index: 'PRIMARY', alternatives: [piece] }, implied: true }
}

/** The last band of attempts that the index tells apart holds all from there on. */
const lastBand = 9

function atLeast(attempt: number): Condition {
  const first = Math.min(attempt, lastBand)
  const bands = Array.from({ length: lastBand - first + 1 }, (_, i) => first + i)
  return {
    piece: { sql: 'attempt >= ?', values: [attempt] },
    finder: {
      index: 'records_attempt',
      alternatives: bands.map((band) => ({ sql: 'attempt_band = ?', values: [band] })),
    },
    implied: attempt <= lastBand,
  }
}

async function unitsOf(sql: Sql, text: string): Promise<Condition[] | null> {
  const units = await findUnits(sql, text)
  if (units === null) return [{ piece: unitBegins(text) }]
  if (units.length === 0) return null
  const piece = { sql: 'unit_id IN (?)', values: [units] }
  return [{ piece, finder: { index: 'records_place', alternatives: [piece] }, implied: true }]
}

/** Ids of the stations meant, within what the caller may see; undefined for all. */
async function stationsOf(
  sql: Sql,
  named: readonly string[] | undefined,
  { station }: Sight,
): Promise<string[] | undefined> {
  if (named === undefined) return station === 'all' ? undefined : station === null ? [] : [station]
  const areIds = named.every((name) => recordId.safeParse(name).success)
  if (areIds) return named.filter((id) => station === 'all' || station === id)
  const rows = await sql.rows<{ id: string }>('SELECT id FROM stations WHERE id IN (?) OR name IN (?)', [
    named,
    named,
  ])
  return rows.map(({ id }) => id).filter((id) => station === 'all' || station === id)
}

const narrowed = (asked: readonly string[] | undefined, seen: readonly string[]) =>
  asked === undefined ? [...seen] : asked.filter((key) => seen.includes(key))

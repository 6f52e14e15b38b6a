import type * as z from 'zod'
import type { RecordLine } from '../../shared/contract/record.ts'
import type { listTrims } from '../../shared/contract/trims.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import { bounded, type Sql, sqlTime } from '../db/sql.ts'
import type { Principal } from '../http/principal.ts'
import { lineColumns, type RecordLineRow, recordLineReply } from '../models/record.ts'
import { sightOf } from '../policies/may-see.ts'
import type { Piece } from './history/conditions.ts'
import { all, type Search, searchOf } from './history/search.ts'

type Query = z.output<NonNullable<typeof listTrims.query>>

/** Records that the principal may see, newest first, by keyset: a page costs the same wherever it stands. */
export async function listRecords(
  database: Database,
  { after, limit, ...filters }: Query,
  principal: Principal,
): Promise<{ items: RecordLine[]; next: string | null }> {
  const sql = bounded(database.sql)
  const search = await searchOf(sql, filters, sightOf(principal))
  const rows = search === null ? [] : await readPage(sql, search, after, limit + 1)
  const page = rows.slice(0, limit)
  const last = page.at(-1)
  return {
    items: page.map(recordLineReply),
    next: rows.length > limit && last ? placeOf(last) : null,
  }
}

/** What a page gives as `next`: the place of its last record. */
export const placeOf = ({ recordedAt, id }: Pick<RecordLineRow, 'recordedAt' | 'id'>) =>
  `${recordedAt.toISOString()}_${id}`

/**
 * One page. The ids come from the index alone, a stretch at a time and each no longer than the page; only records that
 * are shown are read.
 */
export function readPage(
  sql: Sql,
  { index, stretches, rest }: Search,
  after: string | undefined,
  limit: number,
): Promise<RecordLineRow[]> {
  const parts = stretches.map((stretch) => {
    const where = all([stretch, ...rest, ...(after === undefined ? [] : before(after))])
    return {
      sql: `(SELECT id, recorded_at FROM records FORCE INDEX (${index}) WHERE ${where.sql}
        ORDER BY recorded_at DESC, id DESC LIMIT ?)`,
      values: [...where.values, limit],
    }
  })
  return sql.rows<RecordLineRow>(
    `SELECT ${lineColumns} FROM (
      ${parts.map((part) => part.sql).join(' UNION ALL ')} ORDER BY recorded_at DESC, id DESC LIMIT ?
    ) page STRAIGHT_JOIN records r ON r.id = page.id ORDER BY page.recorded_at DESC, page.id DESC`,
    [...parts.flatMap((part) => part.values), limit],
  )
}

/** Written so that an index on time and id serves it: a bound on time, and the id only within the same millisecond. */
function before(after: string): Piece[] {
  const match = /^(\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z)_([0-9a-f-]{36})$/.exec(after)
  const recordedAt = new Date(match?.[1] ?? Number.NaN)
  if (!match || Number.isNaN(recordedAt.getTime())) {
    throw new OgeeError('invalid-request', 'Pass as after what a page gave as next.', {
      errors: [{ path: '/after', message: 'This is no next of a page.' }],
    })
  }
  const at = sqlTime(recordedAt)
  return [{ sql: 'recorded_at <= ? AND (recorded_at < ? OR id < ?)', values: [at, at, match[2]!] }]
}

import { limits } from '../../../shared/limits.ts'
import { failureOf } from '../../db/failure.ts'
import { bounded, type Sql } from '../../db/sql.ts'
import type { Principal } from '../../http/principal.ts'
import { sightOf } from '../../policies/may-see.ts'
import type { Filters } from './conditions.ts'
import { all, searchOf } from './search.ts'

export type Counted = { count: number | null; more: boolean }

/** Counting what an index alone cannot tell ends here. Seconds. */
const mostSeconds = 1.5

/** How many records match, up to a bound, so that no count reads the whole history. */
export async function countRecords(sql: Sql, filters: Filters, principal: Principal): Promise<Counted> {
  const search = await searchOf(bounded(sql), filters, sightOf(principal))
  if (search === null) return { count: 0, more: false }
  const most = limits.countMax + 1
  const parts = search.stretches.map((stretch) => {
    const where = all([stretch, ...search.rest])
    return {
      sql: `(SELECT 1 FROM records FORCE INDEX (${search.index}) WHERE ${where.sql} LIMIT ${most})`,
      values: where.values,
    }
  })
  try {
    const [row] = await sql.rows<{ n: number }>(
      `SET STATEMENT max_statement_time = ${mostSeconds} FOR
        SELECT COUNT(*) AS n FROM (${parts.map((part) => part.sql).join(' UNION ALL ')} LIMIT ${most}) found`,
      parts.flatMap((part) => part.values),
    )
    const count = Number(row?.n)
    return count < most ? { count, more: false } : { count: limits.countMax, more: true }
  } catch (error) {
    if (failureOf(error) === 'too-long') return { count: null, more: true }
    throw error
  }
}

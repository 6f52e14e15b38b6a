import type { Sql, SqlParameter } from '../../db/sql.ts'
import type { Sight } from '../../policies/may-see.ts'
import { type Condition, conditionsOf, type Filters, type Finder, type Piece, timeOf } from './conditions.ts'

/** One way through the records: an index, the stretches of it to follow, and what else must hold of each record. */
export type Search = { index: string; stretches: readonly Piece[]; rest: readonly Piece[] }

/** Records looked at, at most, to say which of two filters leaves fewer; the second only when the first tells nothing. */
const probes = [1_000, 50_000]

/**
 * Decides by which index the records are found: with one filter by its own; with more by the one that leaves fewest, found
 * out by counting each up to a bound. Null when nothing can match.
 */
export async function searchOf(sql: Sql, filters: Filters, sight: Sight): Promise<Search | null> {
  const conditions = await conditionsOf(sql, filters, sight)
  if (conditions === null) return null
  const time = timeOf(filters)
  const able = conditions.filter((condition) => condition.finder !== undefined)
  const best = await fewest(sql, able, time)
  const rest = conditions.filter((condition) => condition !== best || !condition.implied)
  const finder = best?.finder ?? throughTime
  return {
    index: finder.index,
    stretches: finder.alternatives,
    rest: [...time, ...rest.map(({ piece }) => piece)],
  }
}

const throughTime: Finder = { index: 'records_time', alternatives: [{ sql: 'TRUE', values: [] }] }

/** The condition that leaves fewest, the first of those that nothing tells apart. */
async function fewest(sql: Sql, conditions: readonly Condition[], time: readonly Piece[]) {
  let left = conditions
  for (const most of probes) {
    if (left.length < 2) break
    const counts = await countEach(sql, { conditions: left, time, most })
    const least = Math.min(...counts)
    const ties = left.filter((_, i) => counts[i] === least)
    if (least < most) return ties[0]
    left = ties
  }
  return left[0]
}

async function countEach(
  sql: Sql,
  { conditions, time, most }: { conditions: readonly Condition[]; time: readonly Piece[]; most: number },
): Promise<number[]> {
  const counted = conditions.map(({ finder }) => {
    const { index, alternatives } = finder!
    const any = {
      sql: `(${alternatives.map(({ sql }) => sql).join(' OR ')})`,
      values: alternatives.flatMap(({ values }) => values),
    }
    const where = all([any, ...time])
    return {
      sql: `(SELECT COUNT(*) FROM (SELECT 1 FROM records FORCE INDEX (${index}) WHERE ${where.sql} LIMIT ${most}) found)`,
      values: where.values,
    }
  })
  const [row] = await sql.rows<Record<string, number>>(
    `SELECT ${counted.map((one, i) => `${one.sql} AS n${i}`).join(', ')}`,
    counted.flatMap((one) => one.values),
  )
  return conditions.map((_, i) => Number(row?.[`n${i}`]))
}

/** Pieces joined by AND. */
export function all(pieces: readonly Piece[]): { sql: string; values: SqlParameter[] } {
  return {
    sql: pieces.length === 0 ? 'TRUE' : pieces.map(({ sql }) => sql).join(' AND '),
    values: pieces.flatMap(({ values }) => values),
  }
}

import type { Sql, SqlParameter } from '../../db/sql.ts'
import type { Sight } from '../../policies/may-see.ts'
import { type Condition, conditionsOf, type Filters, type Finder, type Piece, timeOf } from './conditions.ts'

/** One way through the records: an index, the stretches of it to follow, and what else must hold of each record. */
export type Search = { index: string; stretches: readonly Piece[]; rest: readonly Piece[] }

/** Records looked at, at most, to say which of two filters leaves fewer. */
const probeMost = 1_000

/**
 * Decides by which index the records are found: with one filter by its own; with more by the one that leaves fewest, found
 * out by counting each up to a thousand. Null when nothing can match.
 */
export async function searchOf(sql: Sql, filters: Filters, sight: Sight): Promise<Search | null> {
  const conditions = await conditionsOf(sql, filters, sight)
  if (conditions === null) return null
  const time = timeOf(filters)
  const able = conditions.filter((condition) => condition.finder !== undefined)
  const best = able.length < 2 ? able[0] : able[await fewest(sql, able, time)]
  const rest = conditions.filter((condition) => condition !== best || !condition.implied)
  const finder = best?.finder ?? throughTime
  return {
    index: finder.index,
    stretches: finder.alternatives,
    rest: [...time, ...rest.map(({ piece }) => piece)],
  }
}

const throughTime: Finder = { index: 'records_time', alternatives: [{ sql: 'TRUE', values: [] }] }

async function fewest(sql: Sql, conditions: readonly Condition[], time: readonly Piece[]): Promise<number> {
  const probes = conditions.map(({ finder }) => {
    const { index, alternatives } = finder!
    const any = {
      sql: `(${alternatives.map(({ sql }) => sql).join(' OR ')})`,
      values: alternatives.flatMap(({ values }) => values),
    }
    const where = all([any, ...time])
    return {
      sql: `(SELECT COUNT(*) FROM (SELECT 1 FROM records FORCE INDEX (${index}) WHERE ${where.sql} LIMIT ${probeMost}) found)`,
      values: where.values,
    }
  })
  const [row] = await sql.rows<Record<string, number>>(
    `SELECT ${probes.map((probe, i) => `${probe.sql} AS n${i}`).join(', ')}`,
    probes.flatMap((probe) => probe.values),
  )
  const counts = conditions.map((_, i) => Number(row?.[`n${i}`]))
  return counts.indexOf(Math.min(...counts))
}

/** Pieces joined by AND. */
export function all(pieces: readonly Piece[]): { sql: string; values: SqlParameter[] } {
  return {
    sql: pieces.length === 0 ? 'TRUE' : pieces.map(({ sql }) => sql).join(' AND '),
    values: pieces.flatMap(({ values }) => values),
  }
}

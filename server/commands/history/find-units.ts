import { limits } from '../../../shared/limits.ts'
import type { Sql, SqlParameter } from '../../db/sql.ts'

const columns = ['serial', 'tail_1', 'tail_2', 'tail_3'] as const

/**
 * Units whose serial, or a part of it behind one of its first three separators, begins with a text; each of the four is an
 * index of its own. Null when there are more than `limits.unitsByTextMax`: then a look through the newest records soon has
 * a page of them.
 */
export async function findUnits(sql: Sql, text: string): Promise<number[] | null> {
  const most = limits.unitsByTextMax + 1
  const begins = `${likeText(text)}%`
  const rows = await sql.rows<{ id: number }>(
    columns.map((column) => `(SELECT id FROM units WHERE ${column} LIKE ? LIMIT ${most})`).join(' UNION '),
    columns.map(() => begins),
  )
  return rows.length < most ? rows.map(({ id }) => id) : null
}

/** The same, said of a record's own copy of the serial. */
export function unitBegins(text: string): { sql: string; values: SqlParameter[] } {
  const begins = `${likeText(text)}%`
  const separators = ['-', '\\_', '.', '/', ' ']
  return {
    sql: `(${['', ...separators].map(() => 'unit LIKE ?').join(' OR ')})`,
    values: [begins, ...separators.map((separator) => `%${separator}${begins}`)],
  }
}

const likeText = (text: string) => text.replaceAll(/[\\%_]/g, String.raw`\$&`)

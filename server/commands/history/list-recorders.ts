import type { Sql, SqlParameter } from '../../db/sql.ts'
import type { Principal } from '../../http/principal.ts'
import { sightOf } from '../../policies/may-see.ts'

/**
 * People and tokens that have recorded, by name, each found by one step through the index. For one station those that can
 * not have recorded there are left out first: for them every record of theirs would be looked at.
 */
export async function listRecorders(sql: Sql, principal: Principal): Promise<{ id: string; name: string }[]> {
  const { station, designs } = sightOf(principal)
  if (station === null) return []
  const elsewhere = `WHERE ids.by_id NOT IN (SELECT id FROM people)
    AND ids.by_id NOT IN (SELECT id FROM tokens WHERE station_id IS NULL OR station_id <> ?)`
  const seen: { sql: string; values: SqlParameter[] }[] = [
    ...(station === 'all' ? [] : [{ sql: 'r.station_id = ?', values: [station] }]),
    ...(designs === null ? [] : [{ sql: 'r.design IN (?)', values: [designs.length > 0 ? designs : ['']] }]),
  ]
  const rows = await sql.rows<{ id: string; name: string | null }>(
    `SELECT ids.by_id AS id, (SELECT r.by_name FROM records r FORCE INDEX (records_by)
        WHERE r.by_id = ids.by_id ${seen.map((piece) => `AND ${piece.sql}`).join(' ')}
        ORDER BY r.recorded_at DESC, r.id DESC LIMIT 1) AS name
      FROM (SELECT by_id FROM records WHERE by_id IS NOT NULL GROUP BY by_id) ids
      ${station === 'all' ? '' : elsewhere}`,
    [...seen.flatMap((piece) => piece.values), ...(station === 'all' ? [] : [station])],
  )
  return rows
    .flatMap(({ id, name }) => (name === null ? [] : { id, name }))
    .sort((a, b) => (a.name < b.name ? -1 : a.name > b.name ? 1 : a.id < b.id ? -1 : 1))
}

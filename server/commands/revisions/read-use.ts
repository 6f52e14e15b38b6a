import type { RevisionUse } from '../../../shared/contract/revisions.ts'
import type { Sql } from '../../db/sql.ts'

const firstFew = 5

type Named = { revision: number; name: string; total: number }

/** What stands on each of a design's revisions, lowest first: lots, and units whose current codes come from it. */
export async function readUse(sql: Sql, key: string, only?: number): Promise<RevisionUse[] | null> {
  const revisions = await sql.rows<{ designId: number; number: number; lots: number }>(
    `SELECT d.id AS designId, r.number, (SELECT COUNT(*) FROM lots l WHERE l.design_id = d.id AND l.revision = r.number)
      AS lots FROM designs d JOIN revisions r ON r.design_id = d.id WHERE d.design_key = ? ORDER BY r.number`,
    [key],
  )
  const designId = revisions[0]?.designId
  if (designId === undefined) return null
  const openLots = await firstOf(
    sql,
    "SELECT revision, lot_key AS name FROM lots WHERE design_id = ? AND state = 'open'",
    designId,
  )
  const units = await firstOf(
    sql,
    `SELECT DISTINCT CAST(JSON_VALUE(c.state, '$.current.revision') AS UNSIGNED) AS revision, u.serial AS name
      FROM units u JOIN unit_codes c ON c.unit_id = u.id WHERE u.design_id = ?`,
    designId,
  )
  return revisions
    .filter(({ number }) => only === undefined || number === only)
    .map(({ number, lots }) => ({
      revision: number,
      lots: Number(lots),
      openLots: summed(openLots, number),
      units: summed(units, number),
    }))
}

/** How many names each revision has in an inner statement, and the first few of them. */
async function firstOf(sql: Sql, inner: string, designId: number): Promise<Named[]> {
  return sql.rows<Named>(
    `SELECT revision, name, total FROM (
      SELECT revision, name, ROW_NUMBER() OVER (PARTITION BY revision ORDER BY name) AS place,
        COUNT(*) OVER (PARTITION BY revision) AS total FROM (${inner}) AS named WHERE revision IS NOT NULL
    ) AS ranked WHERE place <= ? ORDER BY revision, place`,
    [designId, firstFew],
  )
}

function summed(rows: readonly Named[], revision: number): { count: number; first: string[] } {
  const mine = rows.filter((row) => Number(row.revision) === revision)
  return { count: Number(mine[0]?.total ?? 0), first: mine.map((row) => row.name) }
}

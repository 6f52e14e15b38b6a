import type { Sql } from '../../db/sql.ts'

export type UnitName = { designId: number; serial: string }
export type LockedUnit = UnitName & { id: number }

/**
 * Locks the units' rows, and makes those that are not there yet.
 * Always by design and serial, so that two transactions that want the same units want them in the same order.
 */
export async function lockUnits(sql: Sql, names: readonly UnitName[]): Promise<Map<string, LockedUnit>> {
  const wanted = [...new Map(names.map((name) => [unitKey(name), name])).values()].sort(inOrder)
  const found = await lock(sql, wanted)
  const missing = wanted.filter((name) => !found.some((unit) => unitKey(unit) === unitKey(name)))
  if (missing.length === 0) return byKey(found)
  // Somebody else may make the same unit at this moment; then theirs is taken, once they have committed.
  await sql.run('INSERT INTO units (design_id, serial) VALUES ? ON DUPLICATE KEY UPDATE id = id', [
    missing.map((name) => [name.designId, name.serial]),
  ])
  const made = await lock(sql, missing)
  return byKey([...found, ...made])
}

export const unitKey = ({ designId, serial }: UnitName): string => `${designId} ${serial}`

async function lock(sql: Sql, names: readonly UnitName[]): Promise<LockedUnit[]> {
  if (names.length === 0) return []
  return sql.rows(
    `SELECT id, design_id AS designId, serial FROM units WHERE
      ${names.map(() => '(design_id = ? AND serial = ?)').join(' OR ')} ORDER BY design_id, serial FOR UPDATE`,
    names.flatMap((name) => [name.designId, name.serial]),
  )
}

function byKey(units: readonly LockedUnit[]): Map<string, LockedUnit> {
  return new Map(units.map((unit) => [unitKey(unit), unit]))
}

function inOrder(a: UnitName, b: UnitName): number {
  return a.designId - b.designId || (a.serial < b.serial ? -1 : 1)
}

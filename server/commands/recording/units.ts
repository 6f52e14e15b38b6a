import { failureOf } from '../../db/failure.ts'
import type { Sql } from '../../db/sql.ts'

export type UnitName = { designId: number; serial: string }
/** `fresh`: made by this very transaction, so it has no records. */
export type LockedUnit = UnitName & { id: number; fresh: boolean }

export class UnitJustMade extends Error {}

/**
 * Locks the units' rows, and makes those that are not there yet.
 * Always by design and serial, so that two transactions that want the same units want them in the same order.
 */
export async function lockUnits(sql: Sql, names: readonly UnitName[]): Promise<Map<string, LockedUnit>> {
  const wanted = [...new Map(names.map((name) => [unitKey(name), name])).values()].sort(inOrder)
  const locked = byKey(await lock(sql, wanted))
  const missing = wanted.filter((name) => !locked.has(unitKey(name)))
  if (missing.length === 0) return locked
  try {
    const made = await sql.rows<Omit<LockedUnit, 'fresh'>>(
      'INSERT INTO units (design_id, serial) VALUES ? RETURNING id, design_id AS designId, serial',
      [missing.map((name) => [name.designId, name.serial])],
    )
    for (const unit of made) locked.set(unitKey(unit), { ...unit, fresh: true })
    return locked
  } catch (error) {
    // Somebody else made one of them at this moment, and has committed: the next look finds it.
    if (failureOf(error) === 'duplicate') throw new UnitJustMade()
    throw error
  }
}

export const unitKey = ({ designId, serial }: UnitName): string => `${designId} ${serial}`

async function lock(sql: Sql, names: readonly UnitName[]): Promise<LockedUnit[]> {
  if (names.length === 0) return []
  const units = await sql.rows<Omit<LockedUnit, 'fresh'>>(
    `SELECT id, design_id AS designId, serial FROM units WHERE
      ${names.map(() => '(design_id = ? AND serial = ?)').join(' OR ')} ORDER BY design_id, serial FOR UPDATE`,
    names.flatMap((name) => [name.designId, name.serial]),
  )
  return units.map((unit) => ({ ...unit, fresh: false }))
}

function byKey(units: readonly LockedUnit[]): Map<string, LockedUnit> {
  return new Map(units.map((unit) => [unitKey(unit), unit]))
}

function inOrder(a: UnitName, b: UnitName): number {
  return a.designId - b.designId || (a.serial < b.serial ? -1 : 1)
}

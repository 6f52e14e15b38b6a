import { OgeeError } from '../../../shared/errors.ts'
import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'

/**
 * Marks a unit that has records as a reference unit, or no longer.
 * Guarantee: who marked it first and when is kept until the mark is taken away; a sign-off names the reference units of its
 * lot, so that nobody leaves a bad unit out of yield unseen.
 */
export async function markReference(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  { design, unit, reference, by }: { design: string; unit: string; reference: boolean; by: string },
): Promise<void> {
  await transaction(database, async (sql) => {
    const [found] = await sql.rows<{ id: number; marked: number }>(
      `SELECT u.id, u.reference_at IS NOT NULL AS marked FROM units u
        WHERE u.design_id = (SELECT d.id FROM designs d WHERE d.design_key = ?) AND u.serial = ? FOR UPDATE`,
      [design, unit],
    )
    if (!found) {
      throw new OgeeError(
        'not-found',
        `There is no unit ${unit} of ${design} yet: trim it once, then mark it.`,
      )
    }
    if (Boolean(found.marked) === reference) return
    await sql.run('UPDATE units SET reference_by = ?, reference_at = ? WHERE id = ?', [
      reference ? by : null,
      reference ? sqlTime(now()) : null,
      found.id,
    ])
  })
}

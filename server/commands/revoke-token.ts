import { OgeeError } from '../../shared/errors.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { insertLeaves, newLeaf } from '../ledger/leaves.ts'

/**
 * Revokes a token.
 * Guarantee: it holds on every server within half a second; the first revocation leaves a `token` leaf, another one changes
 * nothing.
 */
export async function revokeToken(
  { database, now, notifyLedger }: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  id: string,
  by: string,
): Promise<void> {
  await transaction(database, async (sql) => {
    const found = await database.models.tokens.findByPk(id, { ...sql.within, lock: true })
    if (!found) throw new OgeeError('not-found', 'There is no such token.')
    if (found.get().revokedAt !== null) return
    const at = now()
    await found.update({ revokedAt: at }, sql.within)
    const body = { format: 'ogee.token/1', id, revokedAt: at.toISOString(), revokedBy: by }
    await insertLeaves(sql, [newLeaf('token', at.toISOString(), body)])
  })
  notifyLedger()
}

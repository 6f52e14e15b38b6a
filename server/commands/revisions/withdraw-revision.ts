import type { RevisionSummary, RevisionUse } from '../../../shared/contract/revisions.ts'
import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { insertLeaves, newLeaf } from '../../ledger/leaves.ts'
import { requireMatch, requireState } from '../../policies/revision-rules.ts'
import { type Asked, changeRevision, lockRevision } from './locked.ts'
import { readUse } from './read-use.ts'

/**
 * Withdraws a released revision: no fresh unit is trimmed under it from then on.
 * Guarantee: it is withdrawn exactly when the `withdrawal` leaf exists; the answer says what still stands on it.
 */
export async function withdrawRevision(
  { database, now, notifyLedger }: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: Asked & { reason: string },
): Promise<RevisionSummary & { use: RevisionUse }> {
  const { key, number, by, reason } = asked
  // Looked up before, not within: a design with many units takes a while, and its row is locked while we change it.
  const [use] = (await readUse(database.sql, key, number)) ?? []
  const withdrawn = await transaction(database, async (sql) => {
    const row = await lockRevision(database, sql, asked)
    requireState(row, 'released', 'withdrawn')
    requireMatch(row, asked.ifMatch)
    const at = now()
    const body = {
      format: 'ogee.withdrawal/1',
      design: key,
      revision: number,
      hash: row.documentHash.toString('hex'),
      withdrawnBy: by.name,
      reason,
    }
    await insertLeaves(sql, [newLeaf('withdrawal', at.toISOString(), body)])
    return changeRevision(database, sql, row, key, {
      state: 'withdrawn',
      withdrawn_by: by.name,
      withdrawn_at: sqlTime(at),
      withdraw_reason: reason,
    })
  })
  notifyLedger()
  if (!use) throw new Error(`Revision ${number} of ${key} was withdrawn and has no use to report.`)
  return { ...withdrawn, use }
}

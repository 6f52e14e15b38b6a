import { OgeeError } from '../../shared/errors.ts'
import { sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { insertLeaves, newLeaf } from '../ledger/leaves.ts'
import { lockRevision } from './lock-revision.ts'

/**
 * Releases a revision that is in review.
 * Guarantee: its author never does it; it is released exactly when the `release` leaf exists, which names its hash.
 */
export async function releaseRevision(
  { database, now, notifyLedger }: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: { key: string; number: number; by: { id: string; name: string } },
): Promise<void> {
  const { key, number, by } = asked
  await transaction(database, async (sql) => {
    const revision = await lockRevision(sql, asked)
    if (revision.authorId === by.id) {
      throw new OgeeError('forbidden', 'The author of a revision cannot release it; ask another engineer.')
    }
    if (revision.state !== 'in-review') {
      throw new OgeeError(
        'precondition-failed',
        `Revision ${number} of ${key} is ${revision.state}, not in review.`,
      )
    }
    const at = now().toISOString()
    await sql.run(
      `UPDATE revisions SET state = 'released', released_by = ?, released_at = ?
        WHERE design_id = ? AND number = ?`,
      [by.name, sqlTime(at), revision.designId, number],
    )
    const body = {
      format: 'ogee.release/1',
      design: key,
      revision: number,
      hash: revision.hash.toString('hex'),
      author: revision.author,
      releasedBy: by.name,
    }
    await insertLeaves(sql, [newLeaf('release', at, body)])
  })
  notifyLedger()
}

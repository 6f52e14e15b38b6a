import type { RevisionSummary } from '../../../shared/contract/revisions.ts'
import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { insertLeaves, newLeaf } from '../../ledger/leaves.ts'
import { releasesOwn, requireMatch, requireState } from '../../policies/revision-rules.ts'
import { type Asked, changeRevision, lockRevision } from './locked.ts'

type Options = { authorMayRelease: boolean }

/**
 * Releases a revision that is in review.
 * Guarantee: nobody who wrote any of it does it, unless the site allows that, and then revision and leaf say so; it is
 * released exactly when the `release` leaf exists, which names its hash. Of two at once one does it, and the other hears
 * how it stands.
 */
export async function releaseRevision(
  { database, now, notifyLedger }: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: Asked,
  { authorMayRelease }: Options = { authorMayRelease: false },
): Promise<RevisionSummary> {
  const { key, number, by } = asked
  const released = await transaction(database, async (sql) => {
    const row = await lockRevision(database, sql, asked)
    requireState(row, 'in-review', 'released')
    const releasedByAuthor = releasesOwn(row, by.id, authorMayRelease)
    requireMatch(row, asked.ifMatch)
    const at = now()
    const body = {
      format: 'ogee.release/1',
      design: key,
      revision: number,
      hash: row.documentHash.toString('hex'),
      author: row.author,
      releasedBy: by.name,
      releasedByAuthor,
    }
    await insertLeaves(sql, [newLeaf('release', at.toISOString(), body)])
    return changeRevision(database, sql, row, key, {
      state: 'released',
      released_by: by.name,
      released_at: sqlTime(at),
      released_by_author: releasedByAuthor,
    })
  })
  notifyLedger()
  return released
}

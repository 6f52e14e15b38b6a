import type { RevisionSummary } from '../../../shared/contract/revisions.ts'
import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { requireMatch, requireState } from '../../policies/revision-rules.ts'
import { type Asked, changeRevision, lockRevision } from './locked.ts'

/**
 * Sends a revision in review back to draft, by its author or by whoever reviewed it.
 * Guarantee: its document is the one that was submitted; nothing that was ever released comes back this way.
 */
export async function returnRevision(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  asked: Asked & { reason: string },
): Promise<RevisionSummary> {
  return transaction(database, async (sql) => {
    const row = await lockRevision(database, sql, asked)
    requireState(row, 'in-review', 'returned')
    requireMatch(row, asked.ifMatch)
    return changeRevision(database, sql, row, asked.key, {
      state: 'draft',
      document: { sql: '(SELECT bytes FROM design_documents WHERE hash = document_hash)' },
      returned_by: asked.by.name,
      returned_at: sqlTime(now()),
      return_reason: asked.reason,
    })
  })
}

import type { RevisionSummary } from '../../../shared/contract/revisions.ts'
import { failureOf } from '../../db/failure.ts'
import { type Sql, sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import type { RevisionRow } from '../../models/design.ts'
import { requireMatch, requireState } from '../../policies/revision-rules.ts'
import { type Asked, changeRevision, lockRevision } from './locked.ts'

/**
 * Hands a draft in for review.
 * Guarantee: from here on its bytes stand in a table that is written once, under the hash that the revision names.
 */
export async function submitRevision(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  asked: Asked,
): Promise<RevisionSummary> {
  return transaction(database, async (sql) => {
    const row = await lockRevision(database, sql, asked)
    requireState(row, 'draft', 'submitted')
    requireMatch(row, asked.ifMatch)
    await keepDocument(sql, row)
    return changeRevision(database, sql, row, asked.key, {
      state: 'in-review',
      document: null,
      submitted_by: asked.by.name,
      submitted_at: sqlTime(now()),
    })
  })
}

/** Its bytes may be there already: from before it was returned, or from another revision. */
async function keepDocument(sql: Sql, { designId, number, documentHash }: RevisionRow): Promise<void> {
  const stored = await sql.rows('SELECT 1 AS found FROM design_documents WHERE hash = ?', [documentHash])
  if (stored.length > 0) return
  const keep = sql.run(
    `INSERT INTO design_documents (hash, bytes)
      SELECT document_hash, document FROM revisions WHERE design_id = ? AND number = ?`,
    [designId, number],
  )
  await keep.catch((error: unknown) => {
    // Another design's revision with the same bytes was submitted at the same moment, and has been committed.
    if (failureOf(error) !== 'duplicate') throw error
  })
}

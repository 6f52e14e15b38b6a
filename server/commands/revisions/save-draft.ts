import type { RevisionSummary } from '../../../shared/contract/revisions.ts'
import type { Json } from '../../../shared/ledger/canonical.ts'
import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { type RevisionRow, writersOf } from '../../models/design.ts'
import { requireMatch, requireState } from '../../policies/revision-rules.ts'
import { type Actor, type Asked, changeRevision, lockRevision, summaryOf } from './locked.ts'
import { draftOf, writerOf } from './store-draft.ts'

/**
 * Saves the document of a draft.
 * Guarantee: of two who opened the same state one saves and the other hears who did; whoever saves counts as an author
 * from then on. Saving what is stored already changes nothing, so that a retry after a lost answer does no harm.
 */
export async function saveDraft(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  asked: Asked & { document: Json },
): Promise<RevisionSummary> {
  const { bytes, hash, title } = draftOf(asked.document)
  return transaction(database, async (sql) => {
    const row = await lockRevision(database, sql, asked)
    requireState(row, 'draft', 'saved')
    if (row.documentHash.equals(hash)) return summaryOf(database, sql, asked.key, row)
    requireMatch(row, asked.ifMatch)
    return changeRevision(database, sql, row, asked.key, {
      title,
      document: bytes,
      document_hash: hash,
      writers: withWriter(row, asked.by),
      saved_by: asked.by.name,
      saved_at: sqlTime(now()),
    })
  })
}

function withWriter(row: RevisionRow, by: Actor): string {
  const known = writersOf(row)
  const there = known.some(({ kind, id }) => kind === by.kind && id === by.id)
  return JSON.stringify(there ? known : [...known, writerOf(by)])
}

import { OgeeError } from '../../shared/errors.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { lockRevision } from './lock-revision.ts'

/**
 * Hands a draft in for review.
 * Guarantee: from here on its bytes stand in a table that is written once, under the hash that the revision names.
 */
export async function submitRevision(
  { database }: Pick<Deps, 'database'>,
  asked: { key: string; number: number },
): Promise<void> {
  await transaction(database, async (sql) => {
    const revision = await lockRevision(sql, asked)
    if (revision.state !== 'draft' || revision.document === null) {
      throw new OgeeError(
        'precondition-failed',
        `Revision ${asked.number} of ${asked.key} is ${revision.state}.`,
      )
    }
    const stored = await sql.rows('SELECT 1 AS found FROM design_documents WHERE hash = ?', [revision.hash])
    if (stored.length === 0) {
      await sql.run('INSERT INTO design_documents (hash, bytes) VALUES ?', [
        [[revision.hash, revision.document]],
      ])
    }
    await sql.run(
      "UPDATE revisions SET state = 'in-review', document = NULL WHERE design_id = ? AND number = ?",
      [revision.designId, asked.number],
    )
  })
}

import type { DesignLine } from '../../shared/contract/designs.ts'
import { OgeeError } from '../../shared/errors.ts'
import { canonicalBytes, type Json } from '../../shared/ledger/canonical.ts'
import { failureOf } from '../db/failure.ts'
import { sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { sha256 } from '../ledger/crypto.ts'
import { designReply, type RevisionRow } from '../models/design.ts'

type Asked = {
  key: string
  /** Checked against its schema, and exactly as sent: defaults are never written into somebody's document. */
  document: Json
  author: { kind: 'person' | 'token'; id: string; name: string }
}

/** Creates a design whose revision 1 is a draft. Guarantee: both or neither; a key is used once. */
export async function createDesign(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  { key, document, author }: Asked,
): Promise<DesignLine> {
  const bytes = Buffer.from(canonicalBytes(document))
  const revision: Omit<RevisionRow, 'designId'> = {
    number: 1,
    state: 'draft',
    title: (document as { title: string }).title,
    documentHash: Buffer.from(sha256(bytes)),
    authorId: author.kind === 'person' ? author.id : null,
    author: author.name,
    createdAt: now(),
    releasedBy: null,
    releasedAt: null,
    withdrawnAt: null,
  }
  return transaction(database, async (sql) => {
    await sql
      .run('INSERT INTO designs (design_key, created_at) VALUES ?', [[[key, sqlTime(revision.createdAt)]]])
      .catch((error: unknown) => {
        if (failureOf(error) !== 'duplicate') throw error
        throw new OgeeError('already-exists', `There is a design ${key} already.`, {
          errors: [{ path: '/key', message: 'This key is taken.' }],
        })
      })
    await sql.run(
      `INSERT INTO revisions (design_id, number, state, title, document, document_hash, author_id, author, created_at)
        SELECT id, ?, ?, ?, ?, ?, ?, ?, ? FROM designs WHERE design_key = ?`,
      [
        revision.number,
        revision.state,
        revision.title,
        bytes,
        revision.documentHash,
        revision.authorId,
        revision.author,
        sqlTime(revision.createdAt),
        key,
      ],
    )
    return designReply(key, [{ ...revision, designId: 0 }])
  })
}

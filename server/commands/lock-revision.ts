import { OgeeError } from '../../shared/errors.ts'
import type { Sql } from '../db/sql.ts'
import type { RevisionState } from '../models/design.ts'

export type LockedRevision = {
  designId: number
  state: RevisionState
  hash: Buffer
  document: Buffer | null
  author: string
  authorId: string | null
}

/** The revision's row, locked until the transaction ends, so that of two who change its state one sees the other. */
export async function lockRevision(
  sql: Sql,
  { key, number }: { key: string; number: number },
): Promise<LockedRevision> {
  const [row] = await sql.rows<LockedRevision>(
    `SELECT r.design_id AS designId, r.state, r.document_hash AS hash, r.document, r.author, r.author_id AS authorId
      FROM revisions r JOIN designs d ON d.id = r.design_id WHERE d.design_key = ? AND r.number = ? FOR UPDATE`,
    [key, number],
  )
  if (!row) throw new OgeeError('not-found', `There is no revision ${number} of design ${key}.`)
  return row
}

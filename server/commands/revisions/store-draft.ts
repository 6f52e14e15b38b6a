import { canonicalBytes, type Json } from '../../../shared/ledger/canonical.ts'
import { type Sql, sqlTime } from '../../db/sql.ts'
import { sha256 } from '../../ledger/crypto.ts'
import type { Writer } from '../../models/design.ts'
import type { Actor } from './locked.ts'

/** The bytes of a document that are kept: exactly as sent, defaults never written into it, in canonical form. */
export function draftOf(document: Json): { bytes: Buffer; hash: Buffer; title: string } {
  const bytes = Buffer.from(canonicalBytes(document))
  return { bytes, hash: Buffer.from(sha256(bytes)), title: (document as { title: string }).title }
}

export const writerOf = ({ kind, id, name }: Actor): Writer => ({ kind, id, name })

type NewDraft = {
  designId: number
  number: number
  bytes: Buffer
  hash: Buffer
  title: string
  basedOn: number | null
  by: Actor
  at: Date
}

export async function insertDraft(sql: Sql, draft: NewDraft): Promise<void> {
  const { designId, number, bytes, hash, title, basedOn, by, at } = draft
  const time = sqlTime(at)
  await sql.run(
    `INSERT INTO revisions (design_id, number, state, title, document, document_hash, author_id, author, created_at,
      based_on, writers, saved_by, saved_at) VALUES ?`,
    [
      [
        [
          designId,
          number,
          'draft',
          title,
          bytes,
          hash,
          by.kind === 'person' ? by.id : null,
          by.name,
          time,
          basedOn,
          JSON.stringify([writerOf(by)]),
          by.name,
          time,
        ],
      ],
    ],
  )
}

import type { DesignLine } from '../../shared/contract/designs.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { failureOf } from '../db/failure.ts'
import { type Sql, sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { readDesign } from './read-design.ts'
import { type Actor, lockDesign } from './revisions/locked.ts'
import { draftOf, insertDraft } from './revisions/store-draft.ts'

type Origin = { design: string; revision: number }
type Asked = {
  key: string
  /** Checked against its schema, and exactly as sent: defaults are never written into somebody's document. */
  document: Json
  author: Actor
  copiedFrom?: Origin | undefined
}

/** Creates a design whose revision 1 is a draft. Guarantee: both or neither; a key is used once. */
export async function createDesign(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  { key, document, author, copiedFrom }: Asked,
): Promise<DesignLine> {
  const draft = draftOf(document)
  const at = now()
  return transaction(database, async (sql) => {
    if (copiedFrom) await requireRevision(sql, copiedFrom)
    const row = [key, sqlTime(at), copiedFrom?.design ?? null, copiedFrom?.revision ?? null]
    await sql
      .run('INSERT INTO designs (design_key, created_at, copied_from, copied_revision) VALUES ?', [[row]])
      .catch((error: unknown) => {
        throw failureOf(error) === 'duplicate' ? keyTaken(key) : error
      })
    const designId = await lockDesign(sql, key)
    await insertDraft(sql, { ...draft, designId, number: 1, basedOn: null, by: author, at })
    const design = await readDesign(database, key, sql.within)
    if (!design) throw new Error(`Design ${key} was not stored.`)
    return design
  })
}

async function requireRevision(sql: Sql, { design, revision }: Origin): Promise<void> {
  const found = await sql.rows(
    'SELECT 1 AS found FROM revisions r JOIN designs d ON d.id = r.design_id WHERE d.design_key = ? AND r.number = ?',
    [design, revision],
  )
  if (found.length > 0) return
  const message = `There is no revision ${revision} of design ${design}.`
  throw new OgeeError('not-found', message, { errors: [{ path: '/copiedFrom', message }] })
}

const keyTaken = (key: string) =>
  new OgeeError('already-exists', `There is a design ${key} already.`, {
    errors: [{ path: '/key', message: 'This key is taken.' }],
  })

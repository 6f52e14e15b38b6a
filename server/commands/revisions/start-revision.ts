import type { RevisionSummary } from '../../../shared/contract/revisions.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Json } from '../../../shared/ledger/canonical.ts'
import type { Sql } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import type { RevisionRow } from '../../models/design.ts'
import { plain } from '../../models/table.ts'
import { type Actor, lockDesign, summaryOf } from './locked.ts'
import { draftOf, insertDraft } from './store-draft.ts'

type Asked = {
  key: string
  /** As sent; without it, the draft is a copy of `from`. */
  document?: Json | undefined
  from?: number | undefined
  by: Actor
}

/**
 * Starts the next draft of a design.
 * Guarantee: numbers have no gap and none is given twice, also when two start at once. Where the highest revision is a
 * draft with the very same bytes, that one is the answer: neither a retry nor two people at once make twins.
 */
export async function startRevision(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  { key, document, from, by }: Asked,
): Promise<RevisionSummary> {
  return transaction(database, async (sql) => {
    const designId = await lockDesign(sql, key)
    const rows = plain(
      await database.models.revisions.findAll({ where: { designId }, order: ['number'], ...sql.within }),
    )
    const highest = rows.at(-1)
    if (!highest) throw new Error(`Design ${key} has no revision.`)
    const base = document === undefined || from !== undefined ? baseOf(rows, key, from) : null
    const draft = document === undefined ? await copyOf(sql, base ?? highest) : draftOf(document)
    if (highest.state === 'draft' && highest.documentHash.equals(draft.hash)) {
      return summaryOf(database, sql, key, highest)
    }
    const number = highest.number + 1
    await insertDraft(sql, { ...draft, designId, number, basedOn: base?.number ?? null, by, at: now() })
    return summaryOf(database, sql, key, { designId, number })
  })
}

function baseOf(rows: readonly RevisionRow[], key: string, from: number | undefined): RevisionRow | null {
  if (from === undefined) return rows.filter((row) => row.state === 'released').at(-1) ?? rows.at(-1) ?? null
  const found = rows.find((row) => row.number === from)
  if (found) return found
  const message = `There is no revision ${from} of design ${key}.`
  throw new OgeeError('not-found', message, { errors: [{ path: '/from', message }] })
}

async function copyOf(sql: Sql, row: RevisionRow): Promise<ReturnType<typeof draftOf>> {
  const [stored] = await sql.rows<{ bytes: Buffer | null }>(
    `SELECT COALESCE(r.document, d.bytes) AS bytes FROM revisions r
      LEFT JOIN design_documents d ON d.hash = r.document_hash WHERE r.design_id = ? AND r.number = ?`,
    [row.designId, row.number],
  )
  if (!stored?.bytes) throw new Error(`Revision ${row.number} has no document.`)
  return { bytes: stored.bytes, hash: row.documentHash, title: row.title }
}

import { Op } from 'sequelize'
import type { DesignLine } from '../../shared/contract/designs.ts'
import type { Database } from '../db/connection.ts'
import { designReply, type RevisionRow } from '../models/design.ts'
import { plain } from '../models/table.ts'

type Page = { after?: string | undefined; limit: number; only: readonly string[] | null }

/** Designs by key, with all their revisions. */
export async function readDesigns(
  { models }: Database,
  { after, limit, only }: Page,
): Promise<{ items: DesignLine[]; next: string | null }> {
  const found = plain(
    await models.designs.findAll({
      where: {
        ...(after === undefined ? {} : { designKey: { [Op.gt]: after } }),
        ...(only === null ? {} : { [Op.and]: { designKey: { [Op.in]: only } } }),
      },
      order: ['designKey'],
      limit: limit + 1,
    }),
  )
  const page = found.slice(0, limit)
  const revisions = plain(
    await models.revisions.findAll({
      where: { designId: { [Op.in]: page.map((design) => design.id) } },
      order: ['designId', 'number'],
    }),
  )
  return {
    items: page.map((design) =>
      designReply(
        design.designKey,
        revisions.filter((revision) => revision.designId === design.id),
      ),
    ),
    next: found.length > limit ? (page.at(-1)?.designKey ?? null) : null,
  }
}

/** The design's revisions, lowest first; null when there is no such design. */
export async function readDesign({ models }: Database, key: string): Promise<RevisionRow[] | null> {
  const design = (await models.designs.findOne({ where: { designKey: key } }))?.get()
  if (!design) return null
  return plain(await models.revisions.findAll({ where: { designId: design.id }, order: ['number'] }))
}

/** One revision with its exact bytes; the highest released one for `released`. */
export async function readRevision(
  database: Database,
  key: string,
  number: number | 'released',
): Promise<{ row: RevisionRow; bytes: Buffer } | null> {
  const revisions = await readDesign(database, key)
  const row =
    number === 'released'
      ? revisions?.filter((revision) => revision.state === 'released').at(-1)
      : revisions?.find((revision) => revision.number === number)
  if (!row) return null
  const [stored] = await database.sql.rows<{ bytes: Buffer | null }>(
    `SELECT COALESCE(r.document, d.bytes) AS bytes FROM revisions r
      LEFT JOIN design_documents d ON d.hash = r.document_hash WHERE r.design_id = ? AND r.number = ?`,
    [row.designId, row.number],
  )
  if (!stored?.bytes) throw new Error(`Revision ${row.number} of design ${key} has no document.`)
  return { row, bytes: stored.bytes }
}

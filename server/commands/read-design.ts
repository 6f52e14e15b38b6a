import { Op } from 'sequelize'
import type { DesignLine } from '../../shared/contract/designs.ts'
import type { Database } from '../db/connection.ts'
import type { Sql } from '../db/sql.ts'
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
        design,
        revisions.filter((revision) => revision.designId === design.id),
      ),
    ),
    next: found.length > limit ? (page.at(-1)?.designKey ?? null) : null,
  }
}

/** One design with its revisions, lowest first; null when there is no such design. */
export async function readDesign(
  { models }: Database,
  key: string,
  within: Sql['within'] = {},
): Promise<DesignLine | null> {
  const design = (await models.designs.findOne({ where: { designKey: key }, ...within }))?.get()
  if (!design) return null
  const rows = await models.revisions.findAll({
    where: { designId: design.id },
    order: ['number'],
    ...within,
  })
  return designReply(design, plain(rows))
}

/** One revision with its exact bytes; the highest released one for `released`. */
export async function readRevision(
  database: Database,
  key: string,
  number: number | 'released',
): Promise<{ row: RevisionRow; bytes: Buffer } | null> {
  const { models, sql } = database
  const design = (await models.designs.findOne({ where: { designKey: key } }))?.get()
  if (!design) return null
  const which = number === 'released' ? { state: 'released' as const } : { number }
  const row = (
    await models.revisions.findOne({ where: { designId: design.id, ...which }, order: [['number', 'DESC']] })
  )?.get()
  if (!row) return null
  const [stored] = await sql.rows<{ bytes: Buffer | null; version: number }>(
    `SELECT COALESCE(r.document, d.bytes) AS bytes, r.version FROM revisions r
      LEFT JOIN design_documents d ON d.hash = r.document_hash WHERE r.design_id = ? AND r.number = ?`,
    [row.designId, row.number],
  )
  if (!stored?.bytes) throw new Error(`Revision ${row.number} of design ${key} has no document.`)
  // Somebody saved between the two reads: hash and bytes must be of one state.
  if (stored.version !== row.version) return readRevision(database, key, row.number)
  return { row, bytes: stored.bytes }
}

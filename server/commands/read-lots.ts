import type * as z from 'zod'
import type { listLots } from '../../shared/contract/designs.ts'
import type { Database } from '../db/connection.ts'
import type { SqlParameter } from '../db/sql.ts'

type Reply = z.input<(typeof listLots)['reply']['schema']>
type Page = {
  design?: string | undefined
  after?: string | undefined
  limit: number
  only: readonly string[] | null
}
type Row = Reply['items'][number] & { id: number }

/** Lots, newest first. */
export async function readLots({ sql }: Database, { design, after, limit, only }: Page): Promise<Reply> {
  const where: string[] = ['TRUE']
  const values: SqlParameter[] = []
  if (design !== undefined) {
    where.push('d.design_key = ?')
    values.push(design)
  }
  if (only !== null) {
    where.push('d.design_key IN (?)')
    values.push(only)
  }
  if (after !== undefined) {
    where.push('l.id < ?')
    values.push(/^\d{1,15}$/.test(after) ? Number(after) : 0)
  }
  const rows = await sql.rows<Row>(
    `SELECT l.id, l.lot_key AS \`key\`, d.design_key AS design, l.revision, l.state
      FROM lots l JOIN designs d ON d.id = l.design_id WHERE ${where.join(' AND ')} ORDER BY l.id DESC LIMIT ?`,
    [...values, limit + 1],
  )
  const page = rows.slice(0, limit)
  return {
    items: page.map(({ id: _, ...lot }) => lot),
    next: rows.length > limit ? String(page.at(-1)?.id) : null,
  }
}

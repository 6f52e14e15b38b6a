import type { RevisionSummary } from '../../../shared/contract/revisions.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Database } from '../../db/connection.ts'
import { type Sql, type SqlParameter, sqlTime } from '../../db/sql.ts'
import { type RevisionRow, revisionReply } from '../../models/design.ts'

/** Who acts: a person, or a token in its own name. */
export type Actor = { kind: 'person' | 'token'; id: string; name: string }
export type Place = { key: string; number: number }
/** What a change of a revision starts from. `ifMatch` null: whatever stands there. */
export type Asked = Place & { by: Actor; ifMatch: string | null }

/** A design's id, its row locked until the transaction ends: whoever changes its revisions waits for each other here. */
export async function lockDesign(sql: Sql, key: string): Promise<number> {
  const [design] = await sql.rows<{ id: number }>('SELECT id FROM designs WHERE design_key = ? FOR UPDATE', [
    key,
  ])
  if (!design) throw new OgeeError('not-found', `There is no design ${key}.`)
  return design.id
}

/** The revision's row, locked, so that of two who change its state one sees the other. */
export async function lockRevision(database: Database, sql: Sql, place: Place): Promise<RevisionRow> {
  const designId = await lockDesign(sql, place.key)
  const { number } = place
  const found = await database.models.revisions.findOne({
    where: { designId, number },
    ...sql.within,
    lock: true,
  })
  if (!found) throw new OgeeError('not-found', `There is no revision ${number} of design ${place.key}.`)
  return found.get()
}

/** A value, or a piece of SQL that stands for one. */
type Change = Readonly<Record<string, SqlParameter | { sql: string }>>

/** Changes the locked row, gives it its next version, and answers how it stands then. */
export async function changeRevision(
  database: Database,
  sql: Sql,
  { designId, number }: RevisionRow,
  key: string,
  change: Change,
): Promise<RevisionSummary> {
  const isSql = (value: Change[string]): value is { sql: string } =>
    typeof value === 'object' && value !== null && 'sql' in value
  const sets = Object.entries(change).map(
    ([column, value]) => `${column} = ${isSql(value) ? value.sql : '?'}`,
  )
  const values = Object.values(change).filter((value): value is SqlParameter => !isSql(value))
  await sql.run(
    `UPDATE revisions SET ${sets.join(', ')}, version = version + 1 WHERE design_id = ? AND number = ?`,
    [...values, designId, number],
  )
  return summaryOf(database, sql, key, { designId, number })
}

export async function summaryOf(
  { models }: Database,
  sql: Sql,
  key: string,
  { designId, number }: Pick<RevisionRow, 'designId' | 'number'>,
): Promise<RevisionSummary> {
  const row = (await models.revisions.findOne({ where: { designId, number }, ...sql.within }))?.get()
  if (!row) throw new Error(`Revision ${number} of ${key} has gone.`)
  return { ...revisionReply(row), key }
}

export const timeOf = (now: () => Date): { at: Date; stored: string } => {
  const at = now()
  return { at, stored: sqlTime(at) }
}

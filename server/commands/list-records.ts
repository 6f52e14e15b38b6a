import { Op, type WhereOptions } from 'sequelize'
import type * as z from 'zod'
import type { RecordLine } from '../../shared/contract/record.ts'
import type { listTrims } from '../../shared/contract/trims.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import type { Principal } from '../http/principal.ts'
import { type RecordRow, recordLineReply } from '../models/record.ts'
import { plain } from '../models/table.ts'
import { sightOf } from '../policies/may-see.ts'

type Query = z.output<NonNullable<typeof listTrims.query>>

/** Records that the principal may see, newest first, by keyset: a page costs the same wherever it stands. */
export async function listRecords(
  { models }: Database,
  { after, limit, ...filters }: Query,
  principal: Principal,
): Promise<{ items: RecordLine[]; next: string | null }> {
  const sight = sightOf(principal)
  const given = Object.entries(filters).filter(([, value]) => value !== undefined)
  const conditions: WhereOptions<RecordRow>[] = [
    Object.fromEntries(given),
    ...(sight.station === 'all' ? [] : [{ stationId: sight.station ?? '' }]),
    ...(sight.designs === null ? [] : [{ design: { [Op.in]: sight.designs } }]),
    ...(after === undefined ? [] : [before(after)]),
  ]
  const rows = plain(
    await models.records.findAll({
      where: { [Op.and]: conditions },
      attributes: { exclude: ['receiptKey', 'receiptSignature', 'notices', 'leafId', 'unitId'] },
      order: [
        ['recordedAt', 'DESC'],
        ['id', 'DESC'],
      ],
      limit: limit + 1,
    }),
  )
  const page = rows.slice(0, limit)
  const last = page.at(-1)
  return {
    items: page.map(recordLineReply),
    next: rows.length > limit && last ? `${last.recordedAt.toISOString()}_${last.id}` : null,
  }
}

/** Written so that the index on time and id serves it: a bound on time, and the id only within the same millisecond. */
function before(after: string): WhereOptions<RecordRow> {
  const match = /^(\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z)_([0-9a-f-]{36})$/.exec(after)
  const recordedAt = new Date(match?.[1] ?? Number.NaN)
  if (!match || Number.isNaN(recordedAt.getTime())) {
    throw new OgeeError('invalid-request', 'Pass as after what a page gave as next.', {
      errors: [{ path: '/after', message: 'This is no next of a page.' }],
    })
  }
  return {
    recordedAt: { [Op.lte]: recordedAt },
    [Op.or]: [{ recordedAt: { [Op.lt]: recordedAt } }, { id: { [Op.lt]: match[2]! } }],
  }
}

import type { RecordLine } from '../../../shared/contract/record.ts'
import type { Database } from '../../db/connection.ts'
import type { Principal } from '../../http/principal.ts'
import { listRecords } from '../list-records.ts'
import type { Filters } from './conditions.ts'

const linesAPage = 500

/**
 * Everything that matches, newest first, a page at a time: the next page is read when the last one has been taken, so that memory stays
 * the same however many there are. What is recorded meanwhile is newer than the first page and not part of it.
 */
export async function* exportRecords(
  database: Database,
  filters: Filters,
  principal: Principal,
): AsyncGenerator<RecordLine[]> {
  let after: string | undefined
  do {
    const page = await listRecords(database, { ...filters, after, limit: linesAPage }, principal)
    if (page.items.length > 0) yield page.items
    after = page.next ?? undefined
  } while (after !== undefined)
}

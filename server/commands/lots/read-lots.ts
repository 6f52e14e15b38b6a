import type * as z from 'zod'
import type { LotCounts } from '../../../shared/contract/lot-standing.ts'
import type { Lot, LotDetail, listLots } from '../../../shared/contract/lots.ts'
import { canonicalBytes } from '../../../shared/ledger/canonical.ts'
import type { Database } from '../../db/connection.ts'
import type { Sql, SqlParameter } from '../../db/sql.ts'
import { sha256 } from '../../ledger/crypto.ts'
import type { Board, LotBoards } from './board.ts'
import { countLot, type LotStandings } from './count-lot.ts'
import { findLots, type ListedLot, type LotHead, readReferences } from './find-lot.ts'

type Query = z.output<NonNullable<typeof listLots.query>> & { only: readonly string[] | null }

/** Records that one list may have to read afresh; the lots beyond are counted when somebody asks again. */
const readAtMost = 40_000

/** Lots, newest first, each with its yield where it is counted already or quickly counted. */
export async function readLots(
  { sql }: Database,
  boards: LotBoards,
  { design, key, state, after, limit, only }: Query,
): Promise<{ items: Lot[]; next: string | null }> {
  const conditions: [string, SqlParameter][] = []
  if (design !== undefined) conditions.push(['d.design_key = ?', design])
  if (key !== undefined) conditions.push(['l.lot_key = ?', key])
  if (state !== undefined) conditions.push(['l.state = ?', state])
  if (only !== null) conditions.push(['d.design_key IN (?)', only])
  if (after !== undefined) conditions.push(['l.id < ?', /^\d{1,15}$/.test(after) ? Number(after) : 0])
  const where = ['TRUE', ...conditions.map(([condition]) => condition)].join(' AND ')
  const values = conditions.map(([, value]) => value)
  const heads = await findLots(sql, `${where} ORDER BY l.id DESC LIMIT ?`, [...values, limit + 1])
  const page = heads.slice(0, limit)
  const items: Lot[] = []
  let budget = readAtMost
  const references = new Map<number, Map<number, string>>()
  for (const head of page) {
    const isKept = boards.isFresh(head)
    if (!isKept) budget -= head.records
    if (!isKept && budget < 0 && items.length > 0) {
      items.push(lotLine(head, null))
      continue
    }
    const ofDesign = references.get(head.designId) ?? (await readReferences(sql, head.designId))
    references.set(head.designId, ofDesign)
    const board = await boards.read(sql, head)
    items.push(lotLine(head, { board, counts: countLot(board, ofDesign).counts }))
  }
  return { items, next: heads.length > limit ? String(page.at(-1)?.id) : null }
}

const isoOf = (time: Date | number | null | undefined): string | null =>
  time === null || time === undefined ? null : new Date(time).toISOString()

type Counted = { board: Board; counts: LotCounts }

function lotLine(head: ListedLot, counted: Counted | null): Lot {
  const { signedOffAt, signedOffBy: by, signOffNote: note } = head
  return {
    key: head.key,
    design: head.design,
    revision: head.revision,
    state: head.state,
    openedAt: head.openedAt.toISOString(),
    openedBy: head.openedBy,
    closedAt: isoOf(head.closedAt),
    closedBy: head.closedBy,
    signedOff: signedOffAt === null || by === null ? null : { by, at: signedOffAt.toISOString(), note },
    records: head.records,
    expected: head.expected === 0 ? null : head.expected,
    firstAt: isoOf(counted?.board.firstAt),
    lastAt: isoOf(counted?.board.lastAt),
    counts: counted?.counts ?? null,
  }
}

/** One lot as it stands in `sql`'s transaction, if it has one. */
export async function readLot(
  sql: Sql,
  head: LotHead,
  board: Board,
): Promise<{ detail: LotDetail; standings: LotStandings }> {
  const references = await readReferences(sql, head.designId)
  const standings = countLot(board, references)
  const { counts } = standings
  const { signOff, signOffLeaf } = head
  const detail: LotDetail = {
    ...lotLine(head, { board, counts }),
    counts,
    revisionState: head.revisionState,
    references: standings.references,
    signOff:
      signOff === null || signOffLeaf === null
        ? null
        : {
            counts: signOff.counts as LotCounts,
            leftOut: signOff.leftOut.map(({ unit, reason }) => ({ unit, reason })),
            leaf: signOffLeaf,
          },
    etag: etagOf(head, standings),
  }
  return { detail, standings }
}

/** Another one after every record, every serial added, every step of the lot and every change of its reference units. */
function etagOf(head: LotHead, { references }: LotStandings): string {
  const which = Buffer.from(sha256(canonicalBytes([...references])))
    .toString('hex')
    .slice(0, 16)
  return `"${[head.id, head.state, head.records, head.newest, head.expected, which].join('.')}"`
}

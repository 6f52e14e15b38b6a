import { OgeeError } from '../../../shared/errors.ts'
import type { Sql, SqlParameter } from '../../db/sql.ts'
import type { LotRow } from '../../models/design.ts'

/** A lot's row with its design's key, and what tells whether anything in it changed: as much as a list needs. */
export type ListedLot = {
  id: number
  designId: number
  design: string
  key: string
  revision: number
  revisionState: 'released' | 'withdrawn'
  hash: string
  state: LotRow['state']
  openedAt: Date
  openedBy: string | null
  closedAt: Date | null
  closedBy: string | null
  records: number
  /** The newest leaf of its records; 0 without any. */
  newest: number
  expected: number
  signedOffAt: Date | null
  signedOffBy: string | null
  signOffNote: string | null
}

/** One lot, with what was signed, which names every unit of it. */
export type LotHead = ListedLot & { signOff: SignOffBody | null; signOffLeaf: string | null }

/** Body of the `sign-off` leaf. */
export type SignOffBody = {
  format: 'ogee.sign-off/1'
  design: string
  lot: string
  revision: number
  hash: string
  records: number
  counts: { [field: string]: number | null | { [standing: string]: number } }
  units: string[]
  leftOut: { unit: string; reason: string; standing: string }[]
  references: string[]
  note: string | null
  signedBy: string
}

type Row = Omit<ListedLot, 'hash'> & { documentHash: Buffer }

/** `where` is ours; values go by place. Counts come from the index of records by lot alone. */
export async function findLots(
  sql: Sql,
  where: string,
  values: readonly SqlParameter[],
): Promise<ListedLot[]> {
  const rows = await sql.rows<Row>(
    `SELECT l.id, l.design_id AS designId, d.design_key AS design, l.lot_key AS \`key\`, l.revision, v.state AS revisionState,
      v.document_hash AS documentHash, l.state, l.created_at AS openedAt, l.opened_by AS openedBy,
      l.closed_at AS closedAt, l.closed_by AS closedBy,
      (SELECT COUNT(*) FROM records r WHERE r.design = d.design_key AND r.lot = l.lot_key) AS records,
      (SELECT MAX(r.leaf_id) FROM records r WHERE r.design = d.design_key AND r.lot = l.lot_key) AS newest,
      (SELECT COUNT(*) FROM lot_expected e WHERE e.lot_id = l.id) AS expected, s.at AS signedOffAt,
      s.by_name AS signedOffBy, (SELECT JSON_VALUE(CONVERT(f.body USING utf8mb4), '$.note') FROM ledger_leaves f
        WHERE f.id = s.leaf_id) AS signOffNote
      FROM lots l JOIN designs d ON d.id = l.design_id
      JOIN revisions v ON v.design_id = l.design_id AND v.number = l.revision
      LEFT JOIN lot_sign_offs s ON s.lot_id = l.id
      WHERE ${where}`,
    values,
  )
  return rows.map(({ documentHash, ...row }) => ({
    ...row,
    hash: documentHash.toString('hex'),
    records: Number(row.records),
    newest: Number(row.newest ?? 0),
    expected: Number(row.expected),
  }))
}

/** What was signed is never changed, so it may be read after the row. */
async function withSignOff(sql: Sql, lot: ListedLot): Promise<LotHead> {
  if (lot.signedOffAt === null) return { ...lot, signOff: null, signOffLeaf: null }
  const [leaf] = await sql.rows<{ body: Buffer; hash: Buffer }>(
    'SELECT f.body, f.hash FROM lot_sign_offs s JOIN ledger_leaves f ON f.id = s.leaf_id WHERE s.lot_id = ?',
    [lot.id],
  )
  if (!leaf) throw new Error(`The sign-off of lot ${lot.key} of ${lot.design} has gone.`)
  const signOff = JSON.parse(leaf.body.toString('utf8')) as SignOffBody
  return { ...lot, signOff, signOffLeaf: leaf.hash.toString('hex') }
}

export type LotName = { design: string; lot: string }

export async function findLot(sql: Sql, { design, lot }: LotName): Promise<LotHead> {
  const [found] = await findLots(sql, 'd.design_key = ? AND l.lot_key = ?', [design, lot])
  if (!found) throw noLot()
  return withSignOff(sql, found)
}

/**
 * The lot, its row locked until the transaction ends. Recording shares this lock, before it locks units: what is counted
 * under it is all there is, and no record comes in beside a change of the lot's state.
 */
export async function lockLot(sql: Sql, { design, lot }: LotName): Promise<LotHead> {
  const [row] = await sql.rows<{ id: number }>(
    `SELECT l.id FROM lots l WHERE l.design_id = (SELECT d.id FROM designs d WHERE d.design_key = ?) AND l.lot_key = ?
      FOR UPDATE`,
    [design, lot],
  )
  if (!row) throw noLot()
  const [found] = await findLots(sql, 'l.id = ?', [row.id])
  if (!found) throw new Error(`Lot ${lot} of ${design} has gone.`)
  return withSignOff(sql, found)
}

const noLot = () => new OgeeError('not-found', 'There is no such lot, or it is not open to you.')

/** Reference units of a design, by id. */
export async function readReferences(sql: Sql, designId: number): Promise<Map<number, string>> {
  const rows = await sql.rows<{ id: number; serial: string }>(
    'SELECT id, serial FROM units WHERE design_id = ? AND reference_at IS NOT NULL ORDER BY serial',
    [designId],
  )
  return new Map(rows.map(({ id, serial }) => [id, serial]))
}

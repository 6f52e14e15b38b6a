import type { Stray } from '../../shared/contract/ledger-entries.ts'
import type { Sql } from '../db/sql.ts'
import { statementsOtherwise, statementsWithoutLeaf } from './stray-statements.ts'

/** Leaves looked at by one request. */
const atOnce = 20_000

type Found = { id: number; kind: string; record: string | null }

/**
 * Recorded rows that belong to no entry, of some leaves at a time; the last time also what lies beyond the tree, and
 * revisions whose bytes are not what their hash says. Each statement sees one moment, so what is being recorded is no stray.
 */
export async function readStrays(sql: Sql, after: number): Promise<{ items: Stray[]; next: number | null }> {
  const to = after + atOnce
  const items = [
    ...(await leavesWithoutPlace(sql, after, to)),
    ...(await recordsAstray(sql, after, to)),
    ...(await statementsOtherwise(sql, after, to)),
  ]
  const [last] = await sql.rows<{ id: number }>(
    `SELECT GREATEST(COALESCE((SELECT MAX(id) FROM ledger_leaves), 0),
      COALESCE((SELECT MAX(leaf_id) FROM records), 0)) AS id`,
  )
  if (to < (last?.id ?? 0)) return { items, next: to }
  return {
    items: [
      ...items,
      ...(await statementsWithoutLeaf(sql)),
      ...(await beyondTheHead(sql)),
      ...(await checkpointsAfter(sql)),
      ...(await documentsOtherwise(sql)),
    ],
    next: null,
  }
}

async function leavesWithoutPlace(sql: Sql, after: number, to: number): Promise<Stray[]> {
  const rows = await sql.rows<Found>(
    `SELECT l.id, l.kind, r.id AS record FROM ledger_leaves l LEFT JOIN ledger_entries e ON e.leaf_id = l.id
      LEFT JOIN ledger_pending p ON p.leaf_id = l.id LEFT JOIN records r ON r.leaf_id = l.id
      WHERE l.id > ? AND l.id <= ? AND e.idx IS NULL AND p.leaf_id IS NULL ORDER BY l.id LIMIT 100`,
    [after, to],
  )
  return rows.map(({ id, kind, record }) => ({
    what: 'leaf',
    name: String(id),
    record,
    message: `Leaf ${id}, a ${kind}, has no place in the ledger and waits for none.`,
  }))
}

/**
 * Rows without a leaf; and rows that stand under another unit or station than their own words say: what decides where they
 * are found, and by whom.
 */
async function recordsAstray(sql: Sql, after: number, to: number): Promise<Stray[]> {
  const rows = await sql.rows<{ id: string; number: number; leaf: number | null }>(
    `SELECT r.id, r.number, l.id AS leaf FROM records r LEFT JOIN ledger_leaves l ON l.id = r.leaf_id
      LEFT JOIN units u ON u.id = r.unit_id LEFT JOIN designs d ON d.id = u.design_id LEFT JOIN tokens t ON t.id = r.by_id
      WHERE r.leaf_id > ? AND r.leaf_id <= ? AND (l.id IS NULL OR NOT (u.serial <=> r.unit)
        OR NOT (d.design_key <=> r.design) OR (t.id IS NOT NULL AND NOT (t.station_id <=> r.station_id))
        OR (r.station IS NULL) <> (r.station_id IS NULL)) ORDER BY r.leaf_id LIMIT 100`,
    [after, to],
  )
  return rows.map(({ id, number, leaf }) => ({
    what: 'record',
    name: String(number),
    record: id,
    message:
      leaf === null
        ? `Record ${number} has no leaf: the ledger does not know it.`
        : `Record ${number} stands under another unit or station than it says.`,
  }))
}

/** Checkpoints that the head has counted and that are not there. */
async function checkpointsAfter(sql: Sql): Promise<Stray[]> {
  const [row] = await sql.rows<{ counted: number; last: number | null }>(
    'SELECT checkpoint_number AS counted, (SELECT MAX(number) FROM ledger_checkpoints) AS last FROM ledger_head',
  )
  const last = row?.last ?? 0
  if (!row || row.counted === last) return []
  const message = `The newest checkpoint should be number ${row.counted}, and is number ${last}.`
  return [{ what: 'checkpoint', name: String(row.counted), record: null, message }]
}

/** The head is read last, so that a pass of the sequencer meanwhile puts nothing beyond it. */
async function beyondTheHead(sql: Sql): Promise<Stray[]> {
  const before = await headSize(sql)
  const entries = await sql.rows<{ idx: number }>(
    'SELECT idx FROM ledger_entries WHERE idx >= ? ORDER BY idx LIMIT 2000',
    [before],
  )
  const levels = Array.from({ length: 54 }, (_, level) => ({ level, idx: Math.floor(before / 2 ** level) }))
  const nodes = await sql.rows<{ level: number; idx: number }>(
    `SELECT level, idx FROM ledger_nodes WHERE level > 53 OR
      ${levels.map(() => '(level = ? AND idx >= ?)').join(' OR ')} LIMIT 5000`,
    levels.flatMap(({ level, idx }) => [level, idx]),
  )
  const size = await headSize(sql)
  return [
    ...entries
      .filter(({ idx }) => idx >= size)
      .map(({ idx }): Stray => {
        const message = `Entry ${idx} stands behind the end of the ledger.`
        return { what: 'entry', name: String(idx), record: null, message }
      }),
    ...nodes
      .filter(({ level, idx }) => (idx + 1) * 2 ** level > size)
      .map(({ level, idx }): Stray => {
        const message = `The stored tree has a hash at level ${level}, index ${idx}, which is beyond its end.`
        return { what: 'node', name: `${level}/${idx}`, record: null, message }
      }),
  ].slice(0, 100)
}

async function headSize(sql: Sql): Promise<number> {
  const [head] = await sql.rows<{ size: number }>('SELECT size FROM ledger_head WHERE id = 1')
  return head?.size ?? 0
}

/** Revisions that no leaf names yet (in review) are held to their own hash, and must be there. */
async function documentsOtherwise(sql: Sql): Promise<Stray[]> {
  const changed = await sql.rows<{ hash: Buffer }>(
    'SELECT hash FROM design_documents WHERE UNHEX(SHA2(bytes, 256)) <> hash LIMIT 100',
  )
  const gone = await sql.rows<{ hash: Buffer }>(
    `SELECT v.document_hash AS hash FROM revisions v LEFT JOIN design_documents d ON d.hash = v.document_hash
      WHERE v.state <> 'draft' AND d.hash IS NULL LIMIT 100`,
  )
  const say =
    (how: string) =>
    (row: { hash: Buffer }): Stray => {
      const name = row.hash.toString('hex')
      return {
        what: 'document',
        name,
        record: null,
        message: `The bytes of the revision with hash ${name} ${how}.`,
      }
    }
  return [...changed.map(say('are not those of the hash')), ...gone.map(say('are gone'))]
}

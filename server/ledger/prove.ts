import type { ConsistencyProof, KeyStatement, Proof } from '../../shared/contract/proof.ts'
import { OgeeError } from '../../shared/errors.ts'
import { consistencyParts, inclusionParts } from '../../shared/ledger/proof.ts'
import { peakPlaces, rootOf } from '../../shared/ledger/tree.ts'
import type { Sql } from '../db/sql.ts'
import { sha256 } from './crypto.ts'
import { readNodes, readProofHashes } from './nodes.ts'

type Newest = { size: number; note: string }
type Placed = { body: Buffer; hash: Buffer; idx: number | null }

export async function newestCheckpoint(sql: Sql): Promise<Newest> {
  const [newest] = await sql.rows<Newest>(
    'SELECT size, note FROM ledger_checkpoints ORDER BY number DESC LIMIT 1',
  )
  if (!newest) throw new Error('The ledger was opened without a checkpoint.')
  return newest
}

/**
 * The proof of a record under the newest checkpoint: a fixed number of look-ups by key, of O(log n) rows.
 * Throws `not-in-ledger-yet` until a checkpoint covers the record, which takes about a second.
 */
export async function proveRecord(sql: Sql, recordId: string): Promise<Proof> {
  const [placed] = await sql.rows<Placed>(
    `SELECT l.body, l.hash, e.idx FROM records r JOIN ledger_leaves l ON l.id = r.leaf_id
      LEFT JOIN ledger_entries e ON e.leaf_id = r.leaf_id WHERE r.id = ?`,
    [recordId],
  )
  if (!placed) throw new OgeeError('not-found', 'There is no such record, or it is not open to you.')
  const newest = await newestCheckpoint(sql)
  if (placed.idx === null || placed.idx >= newest.size) {
    throw new OgeeError(
      'not-in-ledger-yet',
      'No checkpoint covers the record yet. One follows within a second or two.',
      { facts: { retryAfterSeconds: 1 } },
    )
  }
  const keys = await keyChanges(sql)
  return {
    format: 'ogee.proof/1',
    record: placed.body.toString('base64'),
    leaf: placed.hash.toString('hex'),
    index: placed.idx,
    path: await readProofHashes(sql, inclusionParts(placed.idx, newest.size)),
    checkpoint: newest.note,
    ...(keys.length === 0 ? {} : { keys }),
  }
}

/** Changes of the key, oldest first: what lets an older or newer key vouch for the one in force. */
export async function keyChanges(sql: Sql): Promise<KeyStatement[]> {
  const rows = await sql.rows<{ statement: string }>(
    'SELECT statement FROM ledger_keys WHERE statement IS NOT NULL ORDER BY number',
  )
  return rows.map((row) => JSON.parse(row.statement) as KeyStatement)
}

/** Proof that the tree of one size begins the tree of another. Only what is signed is shown. */
export async function proveConsistency(
  sql: Sql,
  { from, to: asked }: { from: number; to?: number | undefined },
): Promise<ConsistencyProof> {
  const newest = await newestCheckpoint(sql)
  const to = asked ?? newest.size
  requireSize('/to', to, newest.size)
  requireSize('/from', from, to)
  return {
    format: 'ogee.consistency/1',
    from: { size: from, root: await rootAt(sql, from) },
    to: { size: to, root: await rootAt(sql, to) },
    path: await readProofHashes(sql, consistencyParts(from, to)),
  }
}

function requireSize(path: string, size: number, most: number): void {
  if (size <= most) return
  throw new OgeeError(
    'invalid-request',
    `The ledger has no ${size} entries to go by; the most here is ${most}.`,
    {
      errors: [{ path, message: `At most ${most}.` }],
    },
  )
}

/** The root of the tree as it was at a size, from its peaks. */
export async function rootAt(sql: Sql, size: number): Promise<string> {
  const places = peakPlaces(size)
  const hashAt = await readNodes(sql, places)
  return Buffer.from(rootOf(sha256, places.map(hashAt))).toString('hex')
}

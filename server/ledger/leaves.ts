import type { Json } from '../../shared/ledger/canonical.ts'
import { type LeafKind, writeLeaf } from '../../shared/ledger/leaf.ts'
import { type Sql, sqlTime } from '../db/sql.ts'
import { sha256 } from './crypto.ts'

/** A leaf that is ready to be stored: the canonical form of its body, made once, and the hash of the whole. */
export type NewLeaf = { kind: LeafKind; at: string; text: string; body: Buffer; hash: Buffer }

export function newLeaf(kind: LeafKind, at: string, body: Json): NewLeaf {
  const { text, bytes, hash } = writeLeaf(sha256, kind, at, body)
  return { kind, at, text, body: asBuffer(bytes), hash: asBuffer(hash) }
}

const asBuffer = ({ buffer, byteOffset, length }: Uint8Array) => Buffer.from(buffer, byteOffset, length)

/**
 * Stores leaves and their place in the queue, within the transaction of what they tell about.
 * Guarantee: a leaf exists exactly when its transaction committed, and then it is pending. Gives ids in the order asked.
 */
export async function insertLeaves(sql: Sql, leaves: readonly NewLeaf[]): Promise<number[]> {
  if (leaves.length === 0) return []
  const rows = await sql.rows<{ id: number; hash: Buffer }>(
    'INSERT INTO ledger_leaves (kind, at, hash, body) VALUES ? RETURNING id, hash',
    [leaves.map((leaf) => [leaf.kind, sqlTime(leaf.at), leaf.hash, leaf.body])],
  )
  await sql.run('INSERT INTO ledger_pending (leaf_id, hash) VALUES ?', [
    rows.map((row) => [row.id, row.hash]),
  ])
  // Positions of auto-increments mean nothing (quality.md), so ids find their leaf by its hash.
  const idByHash = new Map(rows.map((row) => [row.hash.toString('hex'), row.id]))
  return leaves.map((leaf) => idByHash.get(leaf.hash.toString('hex'))!)
}

import { signCheckpoint } from '../../shared/ledger/checkpoint.ts'
import { appendLeaves, peakPlaces, rootOf } from '../../shared/ledger/tree.ts'
import type { Database } from '../db/connection.ts'
import { type Sql, sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import { sha256 } from './crypto.ts'
import { requireInForce } from './keys.ts'
import { readNodes } from './nodes.ts'
import type { Signer } from './signer.ts'

const leavesAPass = 1_000
const checkpointEveryMs = 1_000

type Head = {
  size: number
  root: Buffer
  checkpointNumber: number
  checkpointSize: number
  checkpointAt: Date | null
}

/** `note`: the checkpoint that was signed, if one was due. */
export type PassResult = { sequenced: number; more: boolean; note: string | null }

/**
 * One pass: gives committed leaves their places and signs a checkpoint when one is due.
 * Guarantee: all or nothing under the lock of the head row; places are gapless and never given twice, however many servers
 * run passes at once. What is not committed yet waits for the next pass.
 */
export function sequencePass(database: Database, signer: Signer, now: () => Date): Promise<PassResult> {
  return transaction(database, async (sql) => {
    const head = await lockHead(sql)
    const pending = await sql.rows<{ leafId: number; hash: Buffer }>(
      'SELECT leaf_id AS leafId, hash FROM ledger_pending ORDER BY leaf_id LIMIT ?',
      [leavesAPass],
    )
    const next = pending.length === 0 ? head : await append(sql, head, pending)
    const due =
      next.size > next.checkpointSize &&
      (next.checkpointAt === null ||
        Math.abs(now().getTime() - next.checkpointAt.getTime()) >= checkpointEveryMs)
    if (due) await requireInForce(sql, signer)
    const note = due ? await writeCheckpoint(sql, next, signer, now()) : null
    return { sequenced: pending.length, more: pending.length === leavesAPass, note }
  })
}

export async function lockHead(sql: Sql): Promise<Head> {
  const [head] = await sql.rows<Head>(
    `SELECT size, root, checkpoint_number AS checkpointNumber, checkpoint_size AS checkpointSize,
      checkpoint_at AS checkpointAt FROM ledger_head WHERE id = 1 FOR UPDATE`,
  )
  if (!head) throw new Error('The ledger has no head row.')
  return head
}

async function append(
  sql: Sql,
  head: Head,
  pending: readonly { leafId: number; hash: Buffer }[],
): Promise<Head> {
  const grown = appendLeaves(
    sha256,
    head.size,
    peakPlaces(head.size).map(await readNodes(sql, peakPlaces(head.size))),
    pending.map((leaf) => leaf.hash),
  )
  const root = Buffer.from(rootOf(sha256, grown.peaks))
  await sql.run('INSERT INTO ledger_entries (idx, leaf_id) VALUES ?', [
    pending.map((leaf, i) => [head.size + i, leaf.leafId]),
  ])
  await sql.run('INSERT INTO ledger_nodes (level, idx, hash) VALUES ?', [
    grown.added.map((node) => [node.level, node.index, node.hash]),
  ])
  await sql.run('UPDATE ledger_head SET size = ?, root = ? WHERE id = 1', [grown.size, root])
  await sql.run('DELETE FROM ledger_pending WHERE leaf_id IN (?)', [pending.map((leaf) => leaf.leafId)])
  return { ...head, size: grown.size, root }
}

/** Signs the head as it stands and gives the note. The caller holds its lock. */
export async function writeCheckpoint(
  sql: Sql,
  head: Pick<Head, 'size' | 'root' | 'checkpointNumber'>,
  signer: Signer,
  at: Date,
): Promise<string> {
  const checkpoint = { origin: signer.key.name, size: head.size, root: head.root }
  const note = signCheckpoint(sha256, checkpoint, signer.key, signer.sign)
  const number = head.checkpointNumber + 1
  await sql.run('INSERT INTO ledger_checkpoints (number, size, root, at, note) VALUES ?', [
    [[number, head.size, head.root, sqlTime(at), note]],
  ])
  await sql.run(
    'UPDATE ledger_head SET checkpoint_number = ?, checkpoint_size = ?, checkpoint_at = ? WHERE id = 1',
    [number, head.size, sqlTime(at)],
  )
  return note
}

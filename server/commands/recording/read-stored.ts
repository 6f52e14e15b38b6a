import type { Notice } from '../../../shared/contract/record.ts'
import { noticesHash, restoreReceipt } from '../../../shared/ledger/receipt.ts'
import type { Sql } from '../../db/sql.ts'
import { sha256 } from '../../ledger/crypto.ts'
import type { StoredRecord } from './job.ts'

type Row = {
  id: string
  recordedAt: Date
  receiptKey: string
  receiptSignature: Buffer
  notices: string
  leaf: Buffer
  body: Buffer
  idx: number | null
}

/** Records as they were stored, by id, with what was said about them since. */
export async function readStored(sql: Sql, ids: readonly string[]): Promise<Map<string, StoredRecord>> {
  if (ids.length === 0) return new Map()
  const rows = await sql.rows<Row>(
    `SELECT r.id, r.recorded_at AS recordedAt, r.receipt_key AS receiptKey, r.receipt_signature AS receiptSignature,
      r.notices, l.hash AS leaf, l.body, e.idx
      FROM records r JOIN ledger_leaves l ON l.id = r.leaf_id LEFT JOIN ledger_entries e ON e.leaf_id = r.leaf_id
      WHERE r.id IN (?)`,
    [ids],
  )
  const later = await sql.rows<Said>(
    `SELECT a.id, a.follows, a.kind, a.number FROM records a
      WHERE a.follows IN (?) AND a.kind IN ('override', 'withdraw')
      AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = a.id AND w.kind = 'withdraw')
      ORDER BY a.recorded_at, a.id`,
    [ids],
  )
  const open = await sql.rows<{ recordId: string; at: Date }>(
    `SELECT f.record_id AS recordId, MIN(f.at) AS at FROM findings f WHERE f.record_id IN (?)
      AND NOT EXISTS (SELECT 1 FROM finding_answers c WHERE c.closes = f.id) GROUP BY f.record_id`,
    [ids],
  )
  const found = new Map(open.map(({ recordId, at }) => [recordId, findingNotice(at)]))
  return new Map(rows.map((row) => [row.id, storedOf(row, later, found.get(row.id))]))
}

type Said = { id: string; follows: string; kind: string; number: number }

function storedOf(row: Row, later: readonly Said[], finding: Notice | undefined): StoredRecord {
  const given = JSON.parse(row.notices) as Notice[]
  const promised = {
    record: row.id,
    leaf: row.leaf.toString('hex'),
    recordedAt: row.recordedAt.toISOString(),
    notices: noticesHash(sha256, given),
  }
  const said = later.filter((one) => one.follows === row.id).map(noticeOf)
  return {
    text: row.body.toString('utf8'),
    notices: [...given, ...said, ...(finding ? [finding] : [])],
    receipt: restoreReceipt(promised, row.receiptKey, row.receiptSignature),
    index: row.idx,
  }
}

function noticeOf({ id, kind, number }: Said): Notice {
  return kind === 'override'
    ? { code: 'overridden', message: `Its codes were accepted by record ${number}.`, record: id }
    : { code: 'withdrawn', message: `It was withdrawn by record ${number} and no longer counts.`, record: id }
}

const findingNotice = (at: Date): Notice => ({
  code: 'finding-open',
  message: `A finding of ${at.toISOString().slice(0, 10)} on it is open.`,
})

/** The reply: the canonical bytes as they are, and what may change around them. */
export function recordJson(record: StoredRecord, replayed = false): string {
  const notices = replayed ? [...record.notices, replayNotice] : record.notices
  const ledger = record.index === null ? null : { index: record.index }
  return `${record.text.slice(0, -1)},"ledger":${JSON.stringify(ledger)},"notices":${JSON.stringify(notices)},"receipt":${JSON.stringify(record.receipt)}}`
}

const replayNotice: Notice = {
  code: 'replayed',
  message: 'This request was recorded before; this is that record. To measure again, use another key.',
}

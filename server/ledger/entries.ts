import type { StoredRow } from '../../shared/contract/ledger-entries.ts'
import { afterLeaf, beforeLeaf, type EntryHead } from '../../shared/ledger/check/entry-line.ts'
import type { Database } from '../db/connection.ts'
import type { Sql } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'

/** Rows of a look-up: some megabytes, so that memory and the wait for the first stay small. */
const atOnce = 500

type EntryRow = {
  idx: number
  leafKind: string | null
  at: Date | null
  hash: Buffer | null
  body: Buffer | null
  id: string | null
  station: string | null
  lot: string | null
  verdict: StoredRow['verdict']
  measuredAt: Date | null
  recordedAt: Date
  receiptKey: string
  receiptSignature: Buffer
  accepted: number
} & Omit<StoredRow, 'id' | 'measuredAt' | 'recordedAt' | 'accepted' | 'receipt'>

/** Entries as they are stored, wrong or right, some at a time; then how far the ledger goes and where to go on. */
export async function* entryLines(
  database: Database,
  { from, limit }: { from: number; limit: number },
): AsyncGenerator<Uint8Array | string[]> {
  let at = from
  const stop = from + limit
  for (let more = true; more && at < stop; ) {
    const most = Math.min(atOnce, stop - at)
    const { rows, block } = await transaction(database, (sql) => readSome(sql, at, most))
    at = (rows.at(-1)?.idx ?? at - 1) + 1
    more = rows.length === most
    if (rows.length > 0) yield block
    if (!more) at = -1
  }
  const [head] = await database.sql.rows<{ size: number }>('SELECT size FROM ledger_head WHERE id = 1')
  yield [JSON.stringify({ end: true, size: head?.size ?? 0, next: at < 0 ? null : at })]
}

/** By place and not by number of rows, so that a gap costs nothing. */
async function readSome(sql: Sql, from: number, limit: number): Promise<{ rows: EntryRow[]; block: Buffer }> {
  const rows = await sql.rows<EntryRow>(
    `SELECT e.idx, l.kind AS leafKind, l.at, l.hash, l.body, r.id, r.number, r.kind, r.unit, r.channel,
      r.range_id AS \`range\`, r.lot, r.design, r.revision, r.pass, r.follows, r.verdict, r.accepted,
      r.gain_error_ppm AS gainErrorPpm, r.offset_error_v AS offsetErrorV, r.gain_code AS gainCode,
      r.offset_code AS offsetCode, r.worst_lsb AS worstLsb, r.attempt, r.by_name AS \`by\`, r.by_id AS byId, r.station,
      r.measured_at AS measuredAt, r.recorded_at AS recordedAt, r.notices, r.receipt_key AS receiptKey,
      r.receipt_signature AS receiptSignature
      FROM ledger_entries e LEFT JOIN ledger_leaves l ON l.id = e.leaf_id LEFT JOIN records r ON r.leaf_id = e.leaf_id
      WHERE e.idx >= ? ORDER BY e.idx LIMIT ?`,
    [from, limit],
  )
  const last = rows.at(-1)
  if (!last) return { rows, block: Buffer.alloc(0) }
  const nodes = await readCompleted(sql, rows[0]!.idx, last.idx + 1)
  const documents = await readDocuments(sql, rows)
  const block = Buffer.concat(
    rows.flatMap((row) => {
      const hash = row.hash?.toString('hex') ?? null
      const document = row.leafKind === 'release' ? { document: documents.get(row.idx) ?? null } : {}
      return lineOf(
        { index: row.idx, nodes: nodes.get(row.idx) ?? '', hash, row: storedRow(row), ...document },
        row,
      )
    }),
  )
  return { rows, block }
}

/** A line in pieces: the leaf's bytes go out as they were stored, and are never made a text. */
function lineOf(head: EntryHead, { leafKind, at, body }: EntryRow): Buffer[] {
  if (leafKind === null || !at || !body) return [Buffer.from(`${beforeLeaf(head, 4)}null${afterLeaf}\n`)]
  const before = `{"at":"${at.toISOString()}","body":`
  const after = `,"kind":${JSON.stringify(leafKind)}}`
  const length = Buffer.byteLength(before) + body.length + Buffer.byteLength(after)
  return [
    Buffer.from(`${beforeLeaf(head, length)}${before}`),
    // A line end can only come from bytes that somebody changed: a blank in its place changes the hash as well.
    body.includes(10) ? body.map((byte) => (byte === 10 ? 32 : byte)) : body,
    Buffer.from(`${after}${afterLeaf}\n`),
  ] as Buffer[]
}

function storedRow(row: EntryRow): StoredRow | null {
  if (row.id === null) return null
  return {
    id: row.id,
    number: row.number,
    kind: row.kind,
    unit: row.unit,
    channel: row.channel,
    range: row.range,
    lot: row.lot,
    design: row.design,
    revision: row.revision,
    pass: row.pass,
    follows: row.follows,
    verdict: row.verdict,
    accepted: row.accepted !== 0,
    gainErrorPpm: row.gainErrorPpm,
    offsetErrorV: row.offsetErrorV,
    gainCode: row.gainCode,
    offsetCode: row.offsetCode,
    worstLsb: row.worstLsb,
    attempt: row.attempt,
    by: row.by,
    byId: row.byId,
    station: row.station,
    measuredAt: row.measuredAt?.toISOString() ?? null,
    recordedAt: row.recordedAt.toISOString(),
    notices: row.notices,
    receipt: { key: row.receiptKey, signature: row.receiptSignature.toString('base64') },
  }
}

/** Stored hashes of the subtrees that leaves of a stretch complete, by the leaf, lowest first, put together. */
async function readCompleted(sql: Sql, from: number, to: number): Promise<Map<number, string>> {
  const where: string[] = []
  const bounds: number[] = []
  for (let level = 0, width = 1; width <= to; level++, width *= 2) {
    const [first, end] = [Math.floor(from / width), Math.floor(to / width)]
    if (first === end) continue
    where.push('(level = ? AND idx >= ? AND idx < ?)')
    bounds.push(level, first, end)
  }
  const rows = await sql.rows<{ level: number; idx: number; hash: Buffer }>(
    `SELECT level, idx, hash FROM ledger_nodes WHERE ${where.join(' OR ')} ORDER BY level, idx`,
    bounds,
  )
  const byLeaf = new Map<number, string>()
  for (const { level, idx, hash } of rows) {
    const leaf = (idx + 1) * 2 ** level - 1
    byLeaf.set(leaf, `${byLeaf.get(leaf) ?? ''}${hash.toString('hex')}`)
  }
  return byLeaf
}

/** What releases released, by entry: the bytes that their leaves name by hash. */
async function readDocuments(sql: Sql, rows: readonly EntryRow[]): Promise<Map<number, string>> {
  const named = rows.flatMap((row) => {
    const hash = row.leafKind === 'release' ? releasedHash(row.body) : null
    return hash ? [{ idx: row.idx, hash }] : []
  })
  if (named.length === 0) return new Map()
  const found = await sql.rows<{ hash: Buffer; bytes: Buffer }>(
    'SELECT hash, bytes FROM design_documents WHERE hash IN (?)',
    [named.map(({ hash }) => Buffer.from(hash, 'hex'))],
  )
  const bytes = new Map(found.map((row) => [row.hash.toString('hex'), row.bytes.toString('base64')]))
  return new Map(named.flatMap(({ idx, hash }) => (bytes.has(hash) ? [[idx, bytes.get(hash)!]] : [])))
}

function releasedHash(body: Buffer | null): string | null {
  try {
    const { hash } = JSON.parse(body?.toString('utf8') ?? '') as { hash?: unknown }
    return typeof hash === 'string' && /^[0-9a-f]{64}$/.test(hash) ? hash : null
  } catch {
    return null
  }
}

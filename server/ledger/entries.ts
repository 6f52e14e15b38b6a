import { afterLeaf, beforeLeaf } from '../../shared/ledger/check/entry-line.ts'
import type { Database } from '../db/connection.ts'
import { type Cell, rowsOfCells, type Sql } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import { storedColumns, storedRowText, timeText } from './stored-row.ts'

/** Rows of a look-up: a megabyte, gone before the collector has to move it; more of them are slower, and so are fewer. */
const atOnce = 250

type EntryRow = readonly [
  idx: number,
  leafKind: string | null,
  at: string | null,
  hash: Buffer | null,
  body: Buffer | null,
  ...record: Cell[],
]

/** Entries as they are stored, wrong or right, some at a time; then how far the ledger goes and where to go on. */
export async function* entryLines(
  database: Database,
  { from, limit }: { from: number; limit: number },
): AsyncGenerator<Uint8Array | string[]> {
  const stop = from + limit
  const read = (at: number) => {
    const most = Math.min(atOnce, stop - at)
    return transaction(database, (sql) => readSome(sql, at, most))
  }
  let reading = read(from)
  let goOn: number | null
  for (;;) {
    const { next, block } = await reading
    goOn = next
    const isLast = next === null || next >= stop
    if (!isLast) {
      // While this block is sent. Should it fail before it is awaited, that is no failure that nobody hears of.
      reading = read(next)
      reading.catch(() => undefined)
    }
    yield block
    if (isLast) break
  }
  const [head] = await database.sql.rows<{ size: number }>('SELECT size FROM ledger_head WHERE id = 1')
  yield [JSON.stringify({ end: true, size: head?.size ?? 0, next: goOn })]
}

/** By place and not by number of rows, so that a gap costs nothing. `next` is where to go on; null at the end. */
async function readSome(
  sql: Sql,
  from: number,
  limit: number,
): Promise<{ block: Buffer; next: number | null }> {
  const rows = await rowsOfCells<EntryRow>(
    sql,
    `SELECT e.idx, l.kind, l.at, l.hash, l.body, ${storedColumns}
      FROM ledger_entries e LEFT JOIN ledger_leaves l ON l.id = e.leaf_id LEFT JOIN records r ON r.leaf_id = e.leaf_id
      WHERE e.idx >= ? ORDER BY e.idx LIMIT ?`,
    [from, limit],
  )
  const last = rows.at(-1)
  if (!last) return { block: Buffer.alloc(0), next: null }
  const nodes = await readCompleted(sql, rows[0]![0], last[0] + 1)
  const documents = await readDocuments(sql, rows)
  const lines = rows.map((row) => {
    const [index, leafKind, at, hash, body, ...record] = row
    const document = leafKind === 'release' ? { document: documents.get(index) ?? null } : {}
    const head = {
      index,
      nodes: nodes.get(index) ?? '',
      hash: hash?.toString('hex') ?? null,
      row: storedRowText(record),
      ...document,
    }
    return lineOf(head, leafKind, at, body)
  })
  return { block: joined(lines), next: rows.length === limit ? last[0] + 1 : null }
}

/** A line in three pieces: the leaf's bytes go out as they were stored, and are never made a text. */
type Line = { before: string; body: Buffer | null; after: string }

function lineOf(
  head: Parameters<typeof beforeLeaf>[0],
  leafKind: string | null,
  time: string | null,
  body: Buffer | null,
): Line {
  if (leafKind === null || time === null || !body) {
    return { before: `${beforeLeaf(head, 4)}null`, body: null, after: `${afterLeaf}\n` }
  }
  const before = `{"at":${timeText(time)},"body":`
  const after = `,"kind":${JSON.stringify(leafKind)}}`
  const length = before.length + body.length + Buffer.byteLength(after)
  return { before: `${beforeLeaf(head, length)}${before}`, body, after: `${after}${afterLeaf}\n` }
}

/** Written into one block, since making thousands of small ones takes longer than to fill it. */
function joined(lines: readonly Line[]): Buffer {
  const lengths = lines.map(
    ({ before, body, after }) => Buffer.byteLength(before) + (body?.length ?? 0) + Buffer.byteLength(after),
  )
  const block = Buffer.allocUnsafe(lengths.reduce((sum, length) => sum + length, 0))
  let at = 0
  for (const { before, body, after } of lines) {
    at += block.write(before, at)
    if (body) {
      body.copy(block, at)
      // A line end can only come from bytes that somebody changed: a blank in its place changes the hash as well.
      for (let i = body.indexOf(10); i >= 0; i = body.indexOf(10, i + 1)) block[at + i] = 32
      at += body.length
    }
    at += block.write(after, at)
  }
  return block
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
  const rows = await rowsOfCells<[level: number, idx: number, hash: Buffer]>(
    sql,
    `SELECT level, idx, hash FROM ledger_nodes WHERE ${where.join(' OR ')} ORDER BY level, idx`,
    bounds,
  )
  const byLeaf = new Map<number, string>()
  for (const [level, idx, hash] of rows) {
    const leaf = (idx + 1) * 2 ** level - 1
    byLeaf.set(leaf, `${byLeaf.get(leaf) ?? ''}${hash.toString('hex')}`)
  }
  return byLeaf
}

/** What releases released, by entry: the bytes that their leaves name by hash. */
async function readDocuments(sql: Sql, rows: readonly EntryRow[]): Promise<Map<number, string>> {
  const named = rows.flatMap(([idx, leafKind, , , body]) => {
    const hash = leafKind === 'release' ? releasedHash(body) : null
    return hash ? [{ idx, hash }] : []
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

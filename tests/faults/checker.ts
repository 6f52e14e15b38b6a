import { createHash } from 'node:crypto'
import type { Connection } from 'mariadb'
import type { Acknowledged } from './recording-client.ts'

/**
 * Reads the database directly, as its root, and compares it with what stations hold. Separate code from the product's on
 * purpose: it shares no query, no hash and no tree with it.
 */
type Row = {
  id: string
  idem_key: string | null
  hash: Buffer
  body: Buffer
  at: Date
  kind: string
  place: bigint | number | null
}

export async function disagreements(
  root: Connection,
  acknowledgements: readonly Acknowledged[],
  round = 0,
): Promise<string[]> {
  const rows = await root.query<Row[]>(
    `SELECT r.id, i.idem_key, l.hash, l.body, l.at, l.kind, e.idx AS place
       FROM records r
       JOIN ledger_leaves l ON l.id = r.leaf_id
       LEFT JOIN idempotency_keys i ON i.record_id = r.id
       LEFT JOIN ledger_entries e ON e.leaf_id = l.id
      WHERE i.idem_key LIKE ?`,
    [`fault-${round}-%`],
  )
  return [
    ...lostOrChanged(rows, acknowledgements),
    ...doubled(rows, acknowledgements),
    ...leavesThatDoNotHash(rows),
    ...(await ledgerGaps(root)),
  ]
}

function lostOrChanged(rows: readonly Row[], acknowledgements: readonly Acknowledged[]): string[] {
  const byId = new Map(rows.map((row) => [row.id, row]))
  return acknowledgements.flatMap(({ key, id, leaf, canonical }) => {
    const row = byId.get(id)
    if (!row) return [`${key}: acknowledged as ${id}, not in the database`]
    if (row.idem_key !== key) return [`${key}: record ${id} stands under key ${row.idem_key}`]
    if (row.hash.toString('hex') !== leaf)
      return [`${key}: leaf of ${id} is not the one that was acknowledged`]
    const stored: unknown = JSON.parse(row.body.toString('utf8'))
    return JSON.stringify(stored) === JSON.stringify(sortKeys(JSON.parse(canonical)))
      ? []
      : [`${key}: record ${id} is not what was acknowledged`]
  })
}

/** RFC 8785 puts keys in order; parsed and written again they keep it, so sorting the other side is enough to compare. */
function sortKeys(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(sortKeys)
  if (typeof value !== 'object' || value === null) return value
  return Object.fromEntries(
    Object.entries(value)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([name, inner]) => [name, sortKeys(inner)]),
  )
}

function doubled(rows: readonly Row[], acknowledgements: readonly Acknowledged[]): string[] {
  const keys = new Map<string, Set<string>>()
  for (const { key, id } of acknowledgements) keys.set(key, (keys.get(key) ?? new Set()).add(id))
  const told = [...keys]
    .filter(([, ids]) => ids.size > 1)
    .map(([key]) => `${key}: acknowledged under several ids`)
  const units = new Map<string, number>()
  for (const row of rows) {
    const { unit } = JSON.parse(row.body.toString('utf8')) as { unit: string }
    units.set(unit, (units.get(unit) ?? 0) + 1)
  }
  return [...told, ...[...units].filter(([, n]) => n > 1).map(([unit, n]) => `${unit}: recorded ${n} times`)]
}

function leavesThatDoNotHash(rows: readonly Row[]): string[] {
  return rows.flatMap((row) => {
    const leaf = `{"at":"${row.at.toISOString()}","body":${row.body.toString('utf8')},"kind":"${row.kind}"}`
    const hash = createHash('sha256')
      .update(Buffer.concat([Buffer.from([0]), Buffer.from(leaf)]))
      .digest()
    return hash.equals(row.hash) ? [] : [`record ${row.id}: the leaf does not hash to what is stored`]
  })
}

/** Places are 0, 1, 2 … without a gap, each leaf has one or is pending, and the head's root is that of all leaves. */
async function ledgerGaps(root: Connection): Promise<string[]> {
  const entries = await root.query<{ idx: bigint | number; hash: Buffer }[]>(
    'SELECT e.idx, l.hash FROM ledger_entries e JOIN ledger_leaves l ON l.id = e.leaf_id ORDER BY e.idx',
  )
  const gap = entries.findIndex((entry, i) => Number(entry.idx) !== i)
  const homeless = await root.query<{ id: bigint }[]>(
    `SELECT l.id FROM ledger_leaves l LEFT JOIN ledger_entries e ON e.leaf_id = l.id LEFT JOIN ledger_pending p ON p.leaf_id = l.id
      WHERE e.idx IS NULL AND p.leaf_id IS NULL`,
  )
  const [head] = await root.query<{ size: bigint | number; root: Buffer }[]>(
    'SELECT size, root FROM ledger_head',
  )
  const said: string[] = []
  if (gap >= 0) said.push(`place ${gap} of the ledger is missing`)
  for (const { id } of homeless) said.push(`leaf ${id} has no place and is not pending`)
  if (Number(head?.size) !== entries.length)
    said.push(`the head says ${head?.size} entries, ${entries.length} are there`)
  if (entries.length > 0 && !head?.root.equals(rootOf(entries.map((entry) => entry.hash))))
    said.push('the root of the head is not that of the leaves')
  return said
}

/** Merkle tree hash straight from the recursive definition of RFC 9162 section 2.1.1. */
function rootOf(hashes: readonly Buffer[]): Buffer {
  if (hashes.length === 1) return hashes[0]!
  let split = 1
  while (split * 2 < hashes.length) split *= 2
  return createHash('sha256')
    .update(Buffer.concat([Buffer.from([1]), rootOf(hashes.slice(0, split)), rootOf(hashes.slice(split))]))
    .digest()
}

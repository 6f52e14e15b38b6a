import type { LedgerKeyRow, StoredCheckpoint } from '../../shared/contract/ledger-checkpoints.ts'
import type { KeyStatement } from '../../shared/contract/proof.ts'
import { OgeeError } from '../../shared/errors.ts'
import { verifierKey } from '../../shared/ledger/checkpoint.ts'
import type { Sql } from '../db/sql.ts'
import { sha256 } from './crypto.ts'

type Asked = {
  order: 'newest' | 'oldest'
  size?: number | undefined
  after?: string | undefined
  limit: number
}
type Row = { number: number; size: number; root: Buffer; at: Date; note: string }

/** A page of checkpoints by their number. */
export async function readCheckpoints(
  sql: Sql,
  { order, size, after, limit }: Asked,
): Promise<{ items: StoredCheckpoint[]; next: string | null }> {
  const newest = order === 'newest'
  const bound = after === undefined ? (newest ? Number.MAX_SAFE_INTEGER : 0) : numberOf(after)
  const columns = 'SELECT number, size, root, at, note FROM ledger_checkpoints'
  const rows = await sql.rows<Row>(
    `${columns} WHERE number ${newest ? '<' : '>'} ? ${size === undefined ? '' : 'AND size = ?'}
      ORDER BY number ${newest ? 'DESC' : ''} LIMIT ?`,
    [bound, ...(size === undefined ? [] : [size]), limit + 1],
  )
  const items = rows.slice(0, limit).map((row) => ({
    ...row,
    root: row.root.toString('hex'),
    at: row.at.toISOString(),
  }))
  return { items, next: rows.length > limit ? String(items.at(-1)!.number) : null }
}

function numberOf(after: string): number {
  const number = /^\d{1,15}$/.test(after) ? Number(after) : Number.NaN
  if (number > 0) return number
  throw new OgeeError('invalid-request', 'Pass as after what a page gave as next.', {
    errors: [{ path: '/after', message: 'This is no next of a page.' }],
  })
}

/** Every key that the ledger was signed with, oldest first. */
export async function readKeys(sql: Sql): Promise<LedgerKeyRow[]> {
  const rows = await sql.rows<{
    number: number
    name: string
    publicKey: Buffer
    at: Date
    statement: string | null
  }>('SELECT number, name, public_key AS publicKey, at, statement FROM ledger_keys ORDER BY number')
  return rows.map(({ number, name, publicKey, at, statement }) => ({
    number,
    key: verifierKey(sha256, { name, publicKey }),
    at: at.toISOString(),
    statement: statement === null ? null : statementOf(statement),
  }))
}

/** Whatever stands there that is no JSON was not written by us, and vouches for nothing. */
function statementOf(text: string): KeyStatement | null {
  try {
    return JSON.parse(text) as KeyStatement
  } catch {
    return null
  }
}

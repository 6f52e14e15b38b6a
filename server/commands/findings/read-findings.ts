import type { Finding } from '../../../shared/contract/findings.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { type Sql, type SqlParameter, sqlTime } from '../../db/sql.ts'

type Row = {
  id: string
  recordId: string | null
  design: string
  lot: string | null
  /** Of the leaf: the words, and who wrote them. */
  body: Buffer
  at: Date
  leaf: Buffer
  number: number | null
  unit: string | null
}
type AnswerRow = Pick<Row, 'id' | 'body' | 'at' | 'leaf'> & {
  findingId: string
  closes: string | null
}

/** `where` is ours; values go by place. Newest first. */
async function find(sql: Sql, where: string, values: readonly SqlParameter[]): Promise<Finding[]> {
  const rows = await sql.rows<Row>(
    `SELECT f.id, f.record_id AS recordId, f.design, f.lot, l.at, l.body, l.hash AS leaf, r.number, r.unit
      FROM findings f JOIN ledger_leaves l ON l.id = f.leaf_id LEFT JOIN records r ON r.id = f.record_id
      WHERE ${where}`,
    values,
  )
  if (rows.length === 0) return []
  const answers = await sql.rows<AnswerRow>(
    `SELECT a.id, a.finding_id AS findingId, a.closes, l.at, l.body, l.hash AS leaf
      FROM finding_answers a JOIN ledger_leaves l ON l.id = a.leaf_id WHERE a.finding_id IN (?) ORDER BY a.at, a.id`,
    [rows.map(({ id }) => id)],
  )
  return rows.map((row) =>
    replyOf(
      row,
      answers.filter((answer) => answer.findingId === row.id),
    ),
  )
}

export async function readFinding(sql: Sql, id: string): Promise<Finding | null> {
  return (await find(sql, 'f.id = ?', [id]))[0] ?? null
}

type Asked = {
  record?: string | undefined
  design?: string | undefined
  lot?: string | undefined
  state?: 'open' | 'closed' | undefined
  after?: string | undefined
  limit: number
}

/** Those on a record come with those on its lot, and those on a lot with those on its records. */
export async function listFindings(
  sql: Sql,
  { record, design, lot, state, after, limit }: Asked,
): Promise<{ items: Finding[]; next: string | null }> {
  const closed = 'EXISTS (SELECT 1 FROM finding_answers c WHERE c.closes = f.id)'
  const pieces: { sql: string; values: SqlParameter[] }[] = [
    ...(state === undefined ? [] : [{ sql: state === 'closed' ? closed : `NOT ${closed}`, values: [] }]),
    ...(design === undefined ? [] : [{ sql: 'f.design = ?', values: [design] }]),
    ...(lot === undefined ? [] : [{ sql: 'f.lot = ?', values: [lot] }]),
    ...(record === undefined ? [] : [ofRecord(record)]),
    ...(after === undefined ? [] : [before(after)]),
  ]
  const where = pieces.length === 0 ? 'TRUE' : pieces.map((piece) => piece.sql).join(' AND ')
  const items = await find(sql, `${where} ORDER BY f.at DESC, f.id DESC LIMIT ?`, [
    ...pieces.flatMap((piece) => piece.values),
    limit + 1,
  ])
  const last = items.length > limit ? items[limit - 1] : undefined
  return { items: items.slice(0, limit), next: last ? `${last.at}_${last.id}` : null }
}

const ofRecord = (record: string) => ({
  sql: `(f.record_id = ? OR (f.record_id IS NULL AND (f.design, f.lot) =
    (SELECT o.design, o.lot FROM records o WHERE o.id = ?)))`,
  values: [record, record],
})

function before(after: string) {
  const match = /^(\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z)_([0-9a-f-]{36})$/.exec(after)
  const at = new Date(match?.[1] ?? Number.NaN)
  if (!match || Number.isNaN(at.getTime())) {
    throw new OgeeError('invalid-request', 'Pass as after what a page gave as next.', {
      errors: [{ path: '/after', message: 'This is no next of a page.' }],
    })
  }
  return { sql: '(f.at, f.id) < (?, ?)', values: [sqlTime(at), match[2]!] }
}

function replyOf(row: Row, answers: readonly AnswerRow[]): Finding {
  const isClosed = answers.some((answer) => answer.closes !== null)
  return {
    id: row.id,
    subject:
      row.recordId === null
        ? { kind: 'lot', design: row.design, lot: row.lot ?? '' }
        : { kind: 'record', record: row.recordId, number: row.number ?? 0, unit: row.unit ?? '' },
    ...writtenOf(row),
    state: isClosed ? 'closed' : answers.length > 0 ? 'answered' : 'open',
    answers: answers.map((answer) => ({
      id: answer.id,
      act: answer.closes === null ? 'answer' : 'close',
      ...writtenOf(answer),
    })),
  }
}

function writtenOf({ body, at, leaf }: Pick<Row, 'body' | 'at' | 'leaf'>) {
  const { text, by } = JSON.parse(body.toString('utf8')) as Pick<Finding, 'text' | 'by'>
  return { text, by, at: at.toISOString(), leaf: leaf.toString('hex') }
}

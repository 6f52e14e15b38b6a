import type { Stray } from '../../shared/contract/ledger-entries.ts'
import type { Sql } from '../db/sql.ts'

/**
 * Findings, answers and sign-offs have rows beside their leaves, to be found by. The leaf is what counts; a row that says
 * otherwise, is missing, or has no leaf is told here.
 */

const of = (path: string) => `JSON_VALUE(CONVERT(l.body USING utf8mb4), '$.${path}')`
const sameWriter = (table: string) =>
  `${table}.at <=> l.at AND ${table}.by_id <=> ${of('by.id')} AND ${table}.id <=> ${of('id')}`

/** By kind of leaf: the table, under which name it is joined, what else with it, and when a row agrees with its leaf. */
const kinds = [
  {
    kind: 'finding',
    table: 'findings',
    as: 'f',
    joins: 'LEFT JOIN records r ON r.id = f.record_id',
    agrees: `${sameWriter('f')} AND f.record_id <=> ${of('subject.record')}
      AND f.design <=> COALESCE(${of('subject.design')}, r.design) AND f.lot <=> COALESCE(${of('subject.lot')}, r.lot)`,
  },
  {
    kind: 'answer',
    table: 'finding_answers',
    as: 'a',
    joins: '',
    agrees: `${sameWriter('a')} AND a.finding_id <=> ${of('finding')}
      AND a.closes <=> IF(${of('act')} = 'close', ${of('finding')}, NULL)`,
  },
  {
    kind: 'sign-off',
    table: 'lot_sign_offs',
    as: 's',
    joins: 'LEFT JOIN lots o ON o.id = s.lot_id LEFT JOIN designs d ON d.id = o.design_id',
    agrees: `s.at <=> l.at AND s.by_name <=> ${of('signedBy')} AND o.lot_key <=> ${of('lot')}
      AND d.design_key <=> ${of('design')}`,
  },
] as const

/** Of the leaves within bounds: those whose row is not there, or says something else. One pass over them for all kinds. */
export async function statementsOtherwise(sql: Sql, after: number, to: number): Promise<Stray[]> {
  const joins = kinds.map(
    ({ table, as, joins }) => `LEFT JOIN ${table} ${as} ON ${as}.leaf_id = l.id ${joins}`,
  )
  const agree = kinds.map(({ kind, agrees }) => `WHEN '${kind}' THEN ${agrees}`)
  const rows = await sql.rows<{ id: number; kind: string }>(
    `SELECT l.id, l.kind FROM ledger_leaves l ${joins.join(' ')}
      WHERE l.id > ? AND l.id <= ? AND l.kind IN (?) AND NOT CASE l.kind ${agree.join(' ')} END ORDER BY l.id LIMIT 100`,
    [after, to, kinds.map(({ kind }) => kind)],
  )
  return rows.map(({ id, kind }) => {
    const { table } = kinds.find((one) => one.kind === kind)!
    return told(table, id, `says other than leaf ${id}, a ${kind}, or is not there`)
  })
}

/** Rows whose leaf is not there, or is about something else. */
export async function statementsWithoutLeaf(sql: Sql): Promise<Stray[]> {
  const found: Stray[] = []
  for (const { kind, table } of kinds) {
    const rows = await sql.rows<{ id: number }>(
      `SELECT t.leaf_id AS id FROM ${table} t LEFT JOIN ledger_leaves l ON l.id = t.leaf_id
        WHERE l.id IS NULL OR l.kind <> ? LIMIT 100`,
      [kind],
    )
    found.push(...rows.map(({ id }) => told(table, id, `names leaf ${id}, which is no ${kind}`)))
  }
  return found
}

const told = (table: string, id: number, how: string): Stray => ({
  what: 'record',
  name: `${table} ${id}`,
  record: null,
  message: `A row of ${table} ${how}.`,
})

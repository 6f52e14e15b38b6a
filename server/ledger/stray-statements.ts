import type { Stray } from '../../shared/contract/ledger-entries.ts'
import type { Sql } from '../db/sql.ts'

/**
 * Findings, answers and sign-offs have rows beside their leaves, to be found by. The leaf is what counts; a row that says
 * otherwise, is missing, or has no leaf is told here.
 */

const of = (path: string) => `JSON_VALUE(CONVERT(l.body USING utf8mb4), '$.${path}')`
const sameWriter = `t.at <=> l.at AND t.by_id <=> ${of('by.id')} AND t.id <=> ${of('id')}`

/** By kind of leaf: the table, what else it is joined with, and when a row agrees with its leaf. */
const kinds = [
  {
    kind: 'finding',
    table: 'findings',
    joins: 'LEFT JOIN records r ON r.id = t.record_id',
    agrees: `${sameWriter} AND t.record_id <=> ${of('subject.record')}
      AND t.design <=> COALESCE(${of('subject.design')}, r.design) AND t.lot <=> COALESCE(${of('subject.lot')}, r.lot)`,
  },
  {
    kind: 'answer',
    table: 'finding_answers',
    joins: '',
    agrees: `${sameWriter} AND t.finding_id <=> ${of('finding')}
      AND t.closes <=> IF(${of('act')} = 'close', ${of('finding')}, NULL)`,
  },
  {
    kind: 'sign-off',
    table: 'lot_sign_offs',
    joins: 'LEFT JOIN lots o ON o.id = t.lot_id LEFT JOIN designs d ON d.id = o.design_id',
    agrees: `t.at <=> l.at AND t.by_name <=> ${of('signedBy')} AND o.lot_key <=> ${of('lot')}
      AND d.design_key <=> ${of('design')}`,
  },
] as const

/** Of the leaves within bounds: those whose row is not there, or says something else. */
export async function statementsOtherwise(sql: Sql, after: number, to: number): Promise<Stray[]> {
  const found: Stray[] = []
  for (const { kind, table, joins, agrees } of kinds) {
    const rows = await sql.rows<{ id: number }>(
      `SELECT l.id FROM ledger_leaves l LEFT JOIN ${table} t ON t.leaf_id = l.id ${joins}
        WHERE l.id > ? AND l.id <= ? AND l.kind = ? AND NOT (${agrees}) ORDER BY l.id LIMIT 100`,
      [after, to, kind],
    )
    found.push(
      ...rows.map(({ id }) => told(table, id, `says other than leaf ${id}, a ${kind}, or is not there`)),
    )
  }
  return found
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

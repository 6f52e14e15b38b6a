import type { Connection, QueryOptions } from 'mariadb'
import { QueryTypes, type Sequelize, type Transaction } from 'sequelize'

export type SqlValue = string | number | bigint | boolean | null | Date | Uint8Array
/** An array stands for a list (`IN (?)`), an array of arrays for rows (`VALUES ?`). */
export type SqlParameter = SqlValue | readonly SqlValue[] | readonly (readonly SqlValue[])[]

/**
 * The one way to SQL that no model covers. Values never become part of the text here: each `?` is handed to the
 * connector as a bound value, and only its number of places is written into the statement.
 */
export type Sql = {
  /** For models: the transaction that this belongs to, if any. */
  within: { transaction?: Transaction }
  rows<Row extends object>(statement: string, values?: readonly SqlParameter[]): Promise<Row[]>
  run(statement: string, values?: readonly SqlParameter[]): Promise<void>
}

export function sqlOver(sequelize: Sequelize, transaction?: Transaction): Sql {
  if (transaction) return sqlWithin(transaction)
  return {
    within: {},
    rows: async <Row extends object>(statement: string, values: readonly SqlParameter[] = []) => {
      const { text, bind } = spread(statement, values, (i) => `$${i}`)
      return sequelize.query<Row>(text, { bind, type: QueryTypes.SELECT })
    },
    run: async (statement, values = []) => {
      const { text, bind } = spread(statement, values, (i) => `$${i}`)
      await sequelize.query(text, { bind, type: QueryTypes.RAW })
    },
  }
}

/** Straight to the transaction's connection: the way of every record, which Sequelize would make half as long again. */
function sqlWithin(transaction: Transaction): Sql {
  const { connection } = transaction as unknown as { connection: Connection }
  const query = (statement: string, values: readonly SqlParameter[]): Promise<unknown> => {
    const { text, bind } = spread(statement, values, () => '?')
    return connection.query(text, bind)
  }
  return {
    within: { transaction },
    rows: async <Row extends object>(statement: string, values: readonly SqlParameter[] = []) =>
      (await query(statement, values)) as Row[],
    run: async (statement, values = []) => {
      await query(statement, values)
    },
  }
}

/** Just before the caller is told that there was no answer in time: what nobody waits for takes no connection. Seconds. */
const readSeconds = 2.8

/** The same, but every reading ends after some seconds, in the database itself, as an outage. */
export const bounded = (sql: Sql): Sql => ({
  ...sql,
  rows: (statement, values) =>
    sql.rows(`SET STATEMENT max_statement_time = ${readSeconds} FOR ${statement}`, values),
})

/** What a column comes as, without a model: numbers as numbers, times as the database writes them. */
export type Cell = string | number | Buffer | null

/**
 * Rows as arrays, prepared once a connection, for those who read very many: reading them otherwise takes twice as long.
 * Within a transaction only.
 */
export async function rowsOfCells<Row extends readonly Cell[]>(
  { within: { transaction } }: Sql,
  statement: string,
  values: readonly SqlParameter[],
): Promise<Row[]> {
  if (!transaction) throw new Error('Rows of cells are read within a transaction.')
  const { connection } = transaction as unknown as { connection: Connection }
  const { text, bind } = spread(statement, values, () => '?')
  // Sequelize's reading of columns, which stands in the connection's options, is left out: its types do not allow for that.
  const options = { sql: text, rowsAsArray: true, dateStrings: true, typeCast: undefined }
  return connection.execute<Row[]>(options as unknown as QueryOptions, bind)
}

function spread(
  statement: string,
  values: readonly SqlParameter[],
  mark: (position: number) => string,
): { text: string; bind: SqlValue[] } {
  const bind: SqlValue[] = []
  let used = 0
  const place = (value: SqlValue): string => {
    bind.push(value instanceof Uint8Array && !Buffer.isBuffer(value) ? Buffer.from(value) : value)
    return mark(bind.length)
  }
  const text = statement.replaceAll('?', () => {
    const value = values[used++]
    if (value === undefined) throw new RangeError(`A value is missing for: ${statement}`)
    if (!isList(value)) return place(value)
    return value.map((entry) => (isList(entry) ? `(${entry.map(place).join(',')})` : place(entry))).join(',')
  })
  if (used !== values.length) throw new RangeError(`${values.length} values for ${used} places: ${statement}`)
  return { text, bind }
}

function isList(value: SqlParameter): value is readonly SqlValue[] | readonly (readonly SqlValue[])[] {
  return Array.isArray(value)
}

/** A DATETIME(3) value in UTC, written by us so that no time zone of process or connector has a say. */
export function sqlTime(instant: string | Date): string {
  const iso = typeof instant === 'string' ? new Date(instant).toISOString() : instant.toISOString()
  return iso.slice(0, 23).replace('T', ' ')
}

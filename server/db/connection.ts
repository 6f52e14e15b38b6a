import * as mariadb from 'mariadb'
import { Sequelize } from 'sequelize'
import { defineModels, type Models } from '../models/define-models.ts'
import { type Sql, sqlOver } from './sql.ts'

/** Seconds that a statement waits for a row that somebody else holds (quality.md, What the database asks for). */
const lockWaitSeconds = 3
/** A pool that gives nothing within this is an outage; the caller hears so within three seconds. Milliseconds. */
const acquireMs = 2_000

export type Database = { sequelize: Sequelize; models: Models; sql: Sql; close: () => Promise<void> }

/** Opens a pool. Nothing is connected until the first statement; a database that is down is found then. */
export function openDatabase(url: string, pool: { max: number } = { max: 12 }): Database {
  const { username, password, hostname, port, pathname } = new URL(url)
  const sequelize = new Sequelize(
    decodeURIComponent(pathname.slice(1)),
    decodeURIComponent(username),
    decodeURIComponent(password),
    {
      dialect: 'mariadb',
      dialectModule,
      host: hostname,
      port: port === '' ? 3306 : Number(port),
      logging: false,
      timezone: '+00:00',
      pool: { max: pool.max, min: 0, idle: 60_000, acquire: acquireMs },
      // Sequelize's own retry stays off: it would hide deadlocks inside a transaction (quality.md).
      dialectOptions: {
        connectTimeout: 1_500,
        charset: 'utf8mb4',
        initSql: `SET SESSION innodb_lock_wait_timeout = ${lockWaitSeconds}, SESSION tx_isolation = 'READ-COMMITTED'`,
      },
    },
  )
  return {
    sequelize,
    models: defineModels(sequelize),
    sql: sqlOver(sequelize),
    close: () => sequelize.close(),
  }
}

/**
 * Sequelize deletes `rows.meta`, which connectors from 3.1 on define as not deletable. A copy with an ordinary `meta`
 * keeps both content.
 */
const dialectModule = {
  ...mariadb,
  createConnection: async (config: mariadb.ConnectionConfig) => {
    const connection = await mariadb.createConnection(config)
    const query = connection.query.bind(connection) as (...args: unknown[]) => Promise<unknown>
    const patched = async (...args: unknown[]): Promise<unknown> => {
      const rows = await query(...args)
      if (!Array.isArray(rows) || !('meta' in rows)) return rows
      return Object.defineProperty(rows.slice(), 'meta', {
        value: rows.meta,
        configurable: true,
        writable: true,
      })
    }
    return Object.assign(connection, { query: patched })
  },
}

import type { RequestHandler } from 'express'
import { isOgeeError, OgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import { revocationsNeeded } from '../db/grants.ts'
import { missingSteps } from '../db/migrate.ts'
import { requireInForce } from '../ledger/keys.ts'
import { within } from './deadline.ts'
import type { Deps } from './deps.ts'

/** The process answers. */
export const healthz: RequestHandler = (_, response) => {
  response.set('Cache-Control', 'no-store').json({ status: 'ok' })
}

/**
 * The process can do its work: database there, with the history that was signed, as durable as we promise, our key in force,
 * and our account unable to change what is recorded.
 */
export function readyz({
  database,
  signer,
  historyFault,
}: Pick<Deps, 'database' | 'signer' | 'historyFault'>): RequestHandler {
  return async (_, response) => {
    const obstacle = historyFault ?? (await within(obstacleOf(database)))
    if (obstacle !== null) throw new OgeeError('not-ready', obstacle, { facts: { retryAfterSeconds: 5 } })
    await within(requireInForce(database.sql, signer)).catch((error: unknown) => {
      if (!isOgeeError(error, 'ledger-key-differs')) throw error
      throw new OgeeError('not-ready', error.message, { facts: { retryAfterSeconds: 5 } })
    })
    response.set('Cache-Control', 'no-store').json({ status: 'ready' })
  }
}

type Setting = { name: string; value: string }

async function obstacleOf(database: Database): Promise<string | null> {
  const missing = await missingSteps(database)
  if (missing.length > 0)
    return `The database lacks ${missing.join(', ')}: start once with DATABASE_ADMIN_URL.`
  const rows = await database.sql.rows<Setting>(
    `SELECT LOWER(VARIABLE_NAME) AS name, VARIABLE_VALUE AS value FROM information_schema.SESSION_VARIABLES
      WHERE VARIABLE_NAME IN ('innodb_flush_log_at_trx_commit','innodb_doublewrite','log_bin','sync_binlog',
        'sql_mode','character_set_connection','time_zone','tx_isolation')`,
  )
  const unsafe = unsafeSetting(new Map(rows.map((row) => [row.name, row.value])))
  if (unsafe !== null) return unsafe
  const [revocation] = await revocationsNeeded(database.sequelize, database.sequelize.getDatabaseName())
  return revocation === undefined
    ? null
    : `The application's account could change recorded rows. As administrator of the database run: ${revocation};`
}

/** quality.md, What the database asks for. */
export function unsafeSetting(settings: ReadonlyMap<string, string>): string | null {
  const is = (name: string) => settings.get(name) ?? ''
  if (is('innodb_flush_log_at_trx_commit') !== '1') {
    return `innodb_flush_log_at_trx_commit is ${is('innodb_flush_log_at_trx_commit')}; it must be 1, or a power cut loses records.`
  }
  if (is('innodb_doublewrite') !== 'ON')
    return 'innodb_doublewrite is off; it must be on, or a power cut tears pages.'
  if (is('log_bin') === 'ON' && is('sync_binlog') !== '1') {
    return `sync_binlog is ${is('sync_binlog')}; it must be 1 where there is a binary log.`
  }
  if (!/STRICT_(TRANS|ALL)_TABLES/.test(is('sql_mode')))
    return 'sql_mode is not strict: add STRICT_TRANS_TABLES.'
  if (is('character_set_connection') !== 'utf8mb4') return 'character_set_connection is not utf8mb4.'
  if (is('time_zone') !== '+00:00') return 'time_zone of our sessions is not UTC.'
  return is('tx_isolation') === 'READ-COMMITTED'
    ? null
    : 'tx_isolation of our sessions is not READ-COMMITTED.'
}

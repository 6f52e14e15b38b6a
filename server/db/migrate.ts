import { SequelizeStorage, Umzug } from 'umzug'
import { OgeeError } from '../../shared/errors.ts'
import { type Database, openDatabase } from './connection.ts'
import { grantTo, isGranted } from './grants.ts'
import { migrations } from './migrations.ts'
import { sqlOver } from './sql.ts'

const lockSeconds = 120

/**
 * Brings the schema up to date under the administrative account and gives the application's account its rights.
 * Guarantee: safe to run again at any time, after a kill and beside another process that does the same.
 */
export async function migrate(adminUrl: string, appUrl: string): Promise<void> {
  const account = await accountOf(appUrl)
  // One connection, so that the lock and the work are of the same session.
  const admin = openDatabase(adminUrl, { max: 1 })
  try {
    const [lock] = await admin.sql.rows<{ held: number | null }>('SELECT GET_LOCK(?, ?) AS held', [
      `ogee-migrate-${schemaOf(adminUrl)}`.slice(0, 64),
      lockSeconds,
    ])
    if (lock?.held !== 1) {
      throw new OgeeError('configuration', 'Another process has been migrating the database for two minutes.')
    }
    await migrator(admin).up()
    if (account !== null) await grantTo(admin.sequelize, schemaOf(adminUrl), account)
  } finally {
    await admin.close()
  }
}

/**
 * Whether `migrate` would find nothing to do, as the application's account sees it. Asked first at each start: the
 * administrative connection and some thirty grants would take most of the second in which a killed server is to be back.
 */
export async function isUpToDate(database: Database, appUrl: string): Promise<boolean> {
  try {
    return (await missingSteps(database)).length === 0 && (await isGranted(database.sql, schemaOf(appUrl)))
  } catch {
    // An account or a schema that is not there yet is for `migrate` to make, or to say what is wrong.
    return false
  }
}

/** Names of the steps that are not taken yet, as the application's account sees it. */
export async function missingSteps(database: Database): Promise<string[]> {
  const exists = await database.sql.rows(
    "SELECT 1 AS found FROM information_schema.tables WHERE table_schema = DATABASE() AND table_name = 'migrations'",
  )
  if (exists.length === 0) return migrations.map((step) => step.name)
  const rows = await database.sql.rows<{ name: string }>('SELECT name FROM migrations')
  const done = new Set(rows.map((row) => row.name))
  return migrations.map((step) => step.name).filter((name) => !done.has(name))
}

function migrator(admin: Database) {
  return new Umzug({
    migrations,
    context: admin.sequelize,
    storage: new SequelizeStorage({ sequelize: admin.sequelize, tableName: 'migrations' }),
    logger: undefined,
  })
}

/** The account that the application's URL logs in as (user at host), found without naming a schema it may not see yet. */
async function accountOf(appUrl: string): Promise<string | null> {
  const url = new URL(appUrl)
  url.pathname = '/'
  const database = openDatabase(url.toString(), { max: 1 })
  try {
    const [row] = await sqlOver(database.sequelize).rows<{ account: string }>(
      'SELECT CURRENT_USER() AS account',
    )
    const [user, host] = splitAccount(row?.account ?? '')
    return user === 'root' ? null : `'${user}'@'${host}'`
  } finally {
    await database.close()
  }
}

function splitAccount(account: string): [string, string] {
  const at = account.lastIndexOf('@')
  const within = (text: string) => text.replaceAll(/['\\]/g, String.raw`\$&`)
  return [within(account.slice(0, at)), within(account.slice(at + 1))]
}

const schemaOf = (url: string) => decodeURIComponent(new URL(url).pathname.slice(1))

import type { Sequelize } from 'sequelize'
import { recordedNames as firstRecordedNames } from './migrations/001-recorded.ts'
import { lotRecordedNames } from './migrations/003-lots.ts'
import { findingRecordedNames } from './migrations/005-findings.ts'
import { type Sql, sqlOver } from './sql.ts'

/** Every table whose rows are written once, whichever step made it. */
export const recordedNames: readonly string[] = [
  ...firstRecordedNames,
  ...lotRecordedNames,
  ...findingRecordedNames,
]

const changeable: Readonly<Record<string, string>> = {
  people: 'SELECT, INSERT, UPDATE',
  sessions: 'SELECT, INSERT, UPDATE, DELETE',
  stations: 'SELECT, INSERT, UPDATE',
  tokens: 'SELECT, INSERT, UPDATE',
  designs: 'SELECT, INSERT',
  revisions: 'SELECT, INSERT, UPDATE',
  lots: 'SELECT, INSERT, UPDATE',
  units: 'SELECT, INSERT, UPDATE',
  unit_codes: 'SELECT, INSERT, UPDATE',
  instruments: 'SELECT, INSERT, UPDATE',
  counters: 'SELECT, INSERT, UPDATE',
  settings: 'SELECT, INSERT, UPDATE, DELETE',
  ledger_head: 'SELECT, UPDATE',
  ledger_pending: 'SELECT, INSERT, DELETE',
  migrations: 'SELECT',
}

const wanted: Readonly<Record<string, string>> = {
  ...changeable,
  ...Object.fromEntries(recordedNames.map((table) => [table, 'SELECT, INSERT'])),
}

/** Gives the application's account what it needs, table by table, and nothing on the schema as a whole. */
export async function grantTo(admin: Sequelize, schema: string, account: string): Promise<void> {
  for (const [table, privileges] of Object.entries(wanted)) {
    await admin.query(`GRANT ${privileges} ON ${quoted(schema)}.${quoted(table)} TO ${account}`)
  }
}

/** Whether the account that asks was given all that `grantTo` gives. */
export async function isGranted(sql: Sql, schema: string): Promise<boolean> {
  const rows = await sql.rows<Record<string, string>>('SHOW GRANTS FOR CURRENT_USER()')
  const grants = rows.map((row) => Object.values(row)[0] ?? '')
  return Object.entries(wanted).every(([table, privileges]) => {
    const start = `GRANT ${privileges} ON ${quoted(schema)}.${quoted(table)} TO `
    return grants.some((grant) => grant.startsWith(start))
  })
}

const harmful = ['UPDATE', 'DELETE', 'DROP', 'ALTER', 'TRIGGER', 'ALL PRIVILEGES']

/**
 * The statements that take away what the account must not have on recorded tables; empty when all is well.
 * DROP is among them because it also allows TRUNCATE, ALTER and TRIGGER because they lift the guards.
 */
export async function revocationsNeeded(app: Sequelize, schema: string): Promise<string[]> {
  const rows = await sqlOver(app).rows<Record<string, string>>('SHOW GRANTS FOR CURRENT_USER()')
  return rows.flatMap((row) => {
    const grant = Object.values(row)[0] ?? ''
    const match = /^GRANT (.+?) ON (?:(?:TABLE )?)(\S+) TO (\S+)/.exec(grant)
    if (!match) return []
    const [, privileges = '', target = '', account = ''] = match
    if (!coversRecorded(target, schema)) return []
    const held = privileges.split(', ').filter((privilege) => harmful.includes(privilege))
    return held.length === 0 ? [] : [`REVOKE ${held.join(', ')} ON ${target} FROM ${account}`]
  })
}

function coversRecorded(target: string, schema: string): boolean {
  const [database = '', table = ''] = target.split('.')
  if (database !== '*' && !patternCovers(unquoted(database), schema)) return false
  return table === '*' || recordedNames.includes(unquoted(table))
}

/** Grants on a whole schema are patterns: `_` and `%` are wild unless escaped. */
function patternCovers(pattern: string, schema: string): boolean {
  let source = ''
  for (let i = 0; i < pattern.length; i++) {
    const character = pattern[i]!
    if (character === '\\') source += escaped(pattern[++i] ?? '')
    else if (character === '%') source += '.*'
    else if (character === '_') source += '.'
    else source += escaped(character)
  }
  return new RegExp(`^${source}$`, 'u').test(schema)
}

const escaped = (text: string) => text.replaceAll(/[\\^$.*+?()[\]{}|/-]/g, String.raw`\$&`)
const quoted = (name: string) => `\`${name.replaceAll('`', '``')}\``
const unquoted = (name: string) => name.replaceAll(/^`|`$/g, '').replaceAll('``', '`')

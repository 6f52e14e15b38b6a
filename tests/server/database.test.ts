import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { createDesign } from '../../server/commands/create-design.ts'
import { openDatabase } from '../../server/db/connection.ts'
import { isUpToDate, migrate, missingSteps } from '../../server/db/migrate.ts'
import { recordedNames } from '../../server/db/migrations/001-recorded.ts'
import { sqlTime } from '../../server/db/sql.ts'
import { transaction } from '../../server/db/transaction.ts'
import { unsafeSetting } from '../../server/http/health.ts'
import { post } from '../support/server-client.ts'
import { trimBody, unipolar } from '../support/server-factories.ts'
import { addDesign, addStation, addToken, type Harness, serverHarness } from '../support/server-harness.ts'

let harness: Harness
const writer = { kind: 'person', id: '00000000-0000-7000-8000-00000000000a', name: 'Author' } as const

beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  const station = await addToken(harness, ['trims:write'], (await addStation(harness, 'Station A')).id)
  await post(harness.url, station, trimBody())
  await harness.sequencer.drain()
})
afterAll(() => harness.close())

const firstColumn: Record<string, string> = {
  design_documents: 'bytes',
  ledger_leaves: 'kind',
  records: 'kind',
  idempotency_keys: 'body_hash',
  ledger_entries: 'leaf_id',
  ledger_nodes: 'hash',
  ledger_checkpoints: 'note',
  ledger_keys: 'name',
}

describe.each(recordedNames)('recorded table %s', (table) => {
  const column = firstColumn[table]!

  it('refuses UPDATE and DELETE to the application’s account', async () => {
    const denied = { parent: { errno: 1142 } }
    await expect(harness.database.sql.run(`UPDATE ${table} SET ${column} = ${column}`)).rejects.toMatchObject(
      denied,
    )
    await expect(harness.database.sql.run(`DELETE FROM ${table}`)).rejects.toMatchObject(denied)
    await expect(harness.database.sql.run(`TRUNCATE TABLE ${table}`)).rejects.toMatchObject(denied)
  })

  it('refuses UPDATE and DELETE to root too', async () => {
    const root = await harness.test.asRoot()
    const [count] = await root.query<{ n: bigint }[]>(`SELECT COUNT(*) AS n FROM ${table}`)
    expect(Number(count!.n), 'there is something to change').toBeGreaterThan(0)
    const refused = { errno: 1644, sqlState: '45000' }
    await expect(root.query(`UPDATE ${table} SET ${column} = ${column}`)).rejects.toMatchObject(refused)
    await expect(root.query(`DELETE FROM ${table}`)).rejects.toMatchObject(refused)
    await root.end()
  })
})

describe('ASVS V2.3.1 a released revision', () => {
  it.each([
    ["document_hash = REPEAT('x', 32)", 'is fixed'],
    ['number = 9', 'never changes'],
    ["state = 'in-review'", 'never goes back'],
    ["state = 'draft', document = 'x'", 'never goes back'],
  ])('refuses SET %s', async (change, message) => {
    await expect(harness.database.sql.run(`UPDATE revisions SET ${change}`)).rejects.toThrow(message)
  })

  it.each(['released', 'withdrawn'])('is not reached from draft in one step: %s', async (state) => {
    await createDesign(harness.deps, { key: `STEP-${state}`, document: unipolar(), author: writer })
    const change = `UPDATE revisions SET state = ?, document = NULL WHERE state = 'draft'`
    await expect(harness.database.sql.run(change, [state])).rejects.toThrow('never skips a step')
  })

  it('refuses deletion', async () => {
    const root = await harness.test.asRoot()
    await expect(root.query('DELETE FROM revisions')).rejects.toThrow('Only a draft')
    await root.end()
  })
})

describe('migration', () => {
  it('can run again, and leaves nothing missing', async () => {
    await migrate(harness.test.adminUrl, harness.test.url)
    expect(await missingSteps(harness.database)).toEqual([])
  })

  it('is asked for only where a step or a right of the account is missing', async () => {
    const { url, adminUrl } = harness.test
    const isDone = () => isUpToDate(harness.database, url)
    expect(await isDone()).toBe(true)
    const root = await harness.test.asRoot()
    const [own] = await harness.database.sql.rows<{ account: string; name: string }>(
      'SELECT CURRENT_USER() AS account, DATABASE() AS name',
    )
    const account = own!.account.replace(/^(.*)@(.*)$/, "'$1'@'$2'")
    for (const change of [
      `REVOKE INSERT ON ${own!.name}.lot_sign_offs FROM ${account}`,
      `REVOKE SELECT ON ${own!.name}.migrations FROM ${account}`,
      'DELETE FROM migrations ORDER BY name DESC LIMIT 1',
    ]) {
      await root.query(change)
      expect(await isDone(), change).toBe(false)
      await migrate(adminUrl, url)
      expect(await isDone(), `${change}, mended`).toBe(true)
    }
    await root.end()
    const nowhere = openDatabase(`${url}x`)
    expect(await isUpToDate(nowhere, `${url}x`)).toBe(false)
    await nowhere.close()
  })

  it('takes up where a killed one stopped', async () => {
    const root = await harness.test.asRoot()
    await root.query('DELETE FROM migrations')
    await root.query('DROP TRIGGER records_no_update')
    await migrate(harness.test.adminUrl, harness.test.url)
    const triggers = await root.query<{ Trigger: string }[]>("SHOW TRIGGERS LIKE 'records'")
    expect(triggers.map((trigger) => trigger.Trigger).sort()).toEqual([
      'records_no_delete',
      'records_no_update',
    ])
    await root.end()
  })
})

describe('readiness', () => {
  const ready = () => request(harness.url).get('/readyz')

  it('is 200 on a database as it should be', async () => {
    const reply = await ready()
    expect([reply.status, reply.body]).toEqual([200, { status: 'ready' }])
  })

  it('names the statement when the account could change recorded rows', async () => {
    const root = await harness.test.asRoot()
    const [user] = await harness.database.sql.rows<{ account: string }>('SELECT CURRENT_USER() AS account')
    const account = user!.account.replace(/(.*)@(.*)/, "'$1'@'$2'")
    await root.query(`GRANT UPDATE ON records TO ${account}`)
    const bad = await ready()
    expect(bad.status).toBe(503)
    expect(bad.body.code).toBe('not-ready')
    const statement = /run: (REVOKE .*);/.exec(bad.body.detail)![1]!
    expect(statement).toMatch(/^REVOKE UPDATE ON `ogee_t_\w+`\.`records` FROM/)
    await root.query(statement)
    expect((await ready()).status).toBe(200)
    await root.query(`GRANT ALL ON \`${harness.test.name.replaceAll('_', '\\_')}\`.* TO ${account}`)
    const worse = await ready()
    expect(worse.body.detail).toContain('REVOKE ALL PRIVILEGES ON')
    await root.query(
      `REVOKE ALL PRIVILEGES ON \`${harness.test.name.replaceAll('_', '\\_')}\`.* FROM ${account}`,
    )
    expect((await ready()).status).toBe(200)
    await root.end()
  })

  it('names a setting that could lose records', async () => {
    const root = await harness.test.asRoot()
    await root.query('SET GLOBAL innodb_flush_log_at_trx_commit = 2')
    try {
      const reply = await ready()
      expect([reply.status, reply.body.code]).toEqual([503, 'not-ready'])
      expect(reply.body.detail).toContain('innodb_flush_log_at_trx_commit is 2')
    } finally {
      await root.query('SET GLOBAL innodb_flush_log_at_trx_commit = 1')
      await root.end()
    }
  })

  const good = {
    innodb_flush_log_at_trx_commit: '1',
    innodb_doublewrite: 'ON',
    log_bin: 'OFF',
    sync_binlog: '0',
    sql_mode: 'STRICT_TRANS_TABLES',
    character_set_connection: 'utf8mb4',
    time_zone: '+00:00',
    tx_isolation: 'READ-COMMITTED',
  }
  it.each([
    [{}, null],
    [{ innodb_doublewrite: 'OFF' }, 'innodb_doublewrite'],
    [{ log_bin: 'ON' }, 'sync_binlog'],
    [{ log_bin: 'ON', sync_binlog: '1' }, null],
    [{ sql_mode: '' }, 'sql_mode'],
    [{ character_set_connection: 'latin1' }, 'character_set'],
    [{ time_zone: 'SYSTEM' }, 'time_zone'],
    [{ tx_isolation: 'REPEATABLE-READ' }, 'tx_isolation'],
  ])('judges %j', (change, named) => {
    const said = unsafeSetting(new Map(Object.entries({ ...good, ...change })))
    if (named === null) expect(said).toBeNull()
    else expect(said).toContain(named)
  })
})

describe('the transaction helper', () => {
  it('runs the whole again on a deadlock, and commits once', async () => {
    const { database } = harness
    await database.sql.run("INSERT INTO settings (name, value) VALUES ('x', '0'), ('y', '0')")
    let runs = 0
    const add = (first: string, second: string) =>
      transaction(database, async (sql) => {
        runs++
        const bump = 'UPDATE settings SET value = value + 1 WHERE name = ?'
        await sql.run(bump, [first])
        await new Promise((resolve) => setTimeout(resolve, 60))
        await sql.run(bump, [second])
      })
    await Promise.all([add('x', 'y'), add('y', 'x')])
    expect(runs).toBeGreaterThan(2)
    const rows = await database.sql.rows("SELECT value FROM settings WHERE name IN ('x', 'y')")
    expect(rows).toEqual([{ value: '2' }, { value: '2' }])
  })

  it('undoes everything when the work throws, and throws it', async () => {
    const { database } = harness
    const work = transaction(database, async (sql) => {
      await sql.run("INSERT INTO settings (name, value) VALUES ('gone', '1')")
      throw new Error('no')
    })
    await expect(work).rejects.toThrow('no')
    expect(await database.sql.rows("SELECT 1 FROM settings WHERE name = 'gone'")).toEqual([])
  })

  it('runs again when its connection is killed before COMMIT', async () => {
    const { database } = harness
    // Sequelize says on the console that it could not roll back a connection that is gone.
    vi.spyOn(console, 'warn').mockImplementation(() => undefined)
    const root = await harness.test.asRoot()
    let runs = 0
    await transaction(database, async (sql) => {
      const [row] = await sql.rows<{ id: number }>('SELECT CONNECTION_ID() AS id')
      await sql.run("INSERT INTO settings (name, value) VALUES ('killed', '1')")
      if (++runs === 1) await root.query(`KILL ${row!.id}`)
      await sql.rows('SELECT 1')
    })
    expect(runs).toBe(2)
    expect(await database.sql.rows("SELECT value FROM settings WHERE name = 'killed'")).toEqual([
      { value: '1' },
    ])
    await root.end()
  })
})

describe('values', () => {
  it('never become part of the statement', async () => {
    const { sql } = harness.database
    for (const value of [
      "' OR 1=1 -- ",
      '\\',
      '$1',
      '?',
      ':x',
      '"',
      '\u0000',
      "\\'; DROP TABLE records; --",
      '%_',
    ]) {
      const rows = await sql.rows<{ value: string }>('SELECT ? AS value', [value])
      expect(rows[0]!.value).toBe(value)
    }
    await expect(sql.rows('SELECT ?', [])).rejects.toThrow('missing')
    await expect(sql.rows('SELECT 1', [1])).rejects.toThrow('1 values for 0 places')
  })

  it('keep doubles bit for bit and times to the millisecond', async () => {
    const { sql } = harness.database
    const numbers = [0.1, 1 / 3, 5e-324, 1.7976931348623157e308, -2.5e-7]
    for (const number of numbers) {
      const [row] = await sql.rows<{ x: number }>('SELECT CAST(? AS DOUBLE) AS x', [number])
      expect(row!.x).toBe(number)
    }
    expect(sqlTime('2026-03-04T05:06:07.089+02:00')).toBe('2026-03-04 03:06:07.089')
  })
})

it('openDatabase reaches nothing until it is asked to', async () => {
  const database = openDatabase('mariadb://nobody:x@127.0.0.1:1/none')
  await expect(database.sql.rows('SELECT 1')).rejects.toThrow()
  await database.close()
})

import { spawn } from 'node:child_process'
import { mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Connection } from 'mariadb'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { sha256, verifyEd25519 } from '../../server/ledger/crypto.ts'
import { checkNote } from '../../shared/ledger/check-proof.ts'
import { signCheckpoint } from '../../shared/ledger/checkpoint.ts'
import { post } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import { addToken } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'
import { builtCli, ended, problemOf, type RunOptions } from './support/built-cli.ts'

const cli = builtCli()
let scene: Scene
let root: Connection
let folder = ''
let token = ''
const records: { id: string; number: number; ledger: { index: number } | null }[] = []

beforeAll(async () => {
  scene = await serverScene()
  root = await scene.harness.test.asRoot()
  folder = mkdtempSync(join(tmpdir(), 'ogee-ledger-'))
  token = (await addToken(scene.harness, ['ledger:read'])).token
  for (let i = 0; i < 4; i++) records.push(await post(scene.url, scene.station, trimBody({ unit: `L-${i}` })))
  await settled()
}, 120_000)
afterAll(async () => {
  await root.end()
  await scene.harness.close()
})

/** A second passes between checkpoints; then nothing is left to sign. */
async function settled(): Promise<void> {
  for (let open = 1; open > 0; ) {
    await scene.harness.sequencer.drain()
    const [row] = await scene.harness.database.sql.rows<{ open: number }>(
      'SELECT size - checkpoint_size + (SELECT COUNT(*) FROM ledger_pending) AS open FROM ledger_head',
    )
    open = row!.open
    await new Promise((resolve) => setTimeout(resolve, 100))
  }
}

const run = (args: string[], options: RunOptions = {}) =>
  cli.run(['ledger', ...args], {
    cwd: folder,
    ...options,
    env: { OGEE_URL: scene.url, OGEE_TOKEN: token, ...options.env },
  })
const asJson = (ran: { stdout: string }) => JSON.parse(ran.stdout)

describe('ledger checkpoint', () => {
  test('gives the signed note, without a token', async () => {
    const named = await cli.run(['ledger', 'key'], { cwd: folder, env: { OGEE_URL: scene.url } })
    expect(named).toMatchObject({
      code: 0,
      stderr: '',
      stdout: expect.stringMatching(/^test\/ledger\+[0-9a-f]{8}\+/),
    })
    writeFileSync(
      join(folder, 'ogee.pub'),
      (await fetch(`${scene.url}/api/v1/ledger/key`).then((r) => r.text())) as string,
    )
    const ran = await cli.run(['ledger', 'checkpoint', '--key', 'ogee.pub'], {
      cwd: folder,
      env: { OGEE_URL: scene.url },
    })
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
    const { key } = scene.harness.deps.signer
    const checked = checkNote({ sha256, verify: verifyEd25519 }, ran.stdout, key, [])
    expect(checked).toMatchObject({ checkpoint: { origin: 'test/ledger' } })
    expect((await run(['checkpoint', '--output', 'old.txt'])).code).toBe(0)
    expect(readFileSync(join(folder, 'old.txt'), 'utf8')).toBe(ran.stdout)
  })

  test('that another key signed ends with 16 and prints none', async () => {
    const pub = 'other.pub'
    writeFileSync(join(folder, pub), (await import('../support/memory-ledger.ts')).memoryLedger([]).pub)
    const ran = await run(['checkpoint', '--key', pub])
    expect({ code: ran.code, stdout: ran.stdout }).toEqual({ code: 16, stdout: '' })
    expect(ran.stderr).toContain('another key')
  })
})

describe('ledger consistency', () => {
  test('holds between a kept checkpoint and the newest, and between two files', async () => {
    await post(scene.url, scene.station, trimBody({ unit: 'L-9' }))
    await settled()
    const ran = await run(['consistency', 'old.txt', '--key', 'ogee.pub'])
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
    expect(asJson(ran)).toMatchObject({ format: 'ogee.consistency-check/1', ok: true })
    expect(asJson(ran).to).toBe(asJson(ran).from + 1)
    await run(['checkpoint', '--output', 'new.txt'])
    // A file as the server appends it: several checkpoints, of which the last counts.
    const both = readFileSync(join(folder, 'old.txt'), 'utf8') + readFileSync(join(folder, 'new.txt'), 'utf8')
    writeFileSync(join(folder, 'all.txt'), both)
    expect(asJson(await run(['consistency', 'old.txt', 'all.txt'])).to).toBe(asJson(ran).to)
    expect((await run(['consistency', 'new.txt', 'old.txt'])).code).toBe(16)
  })

  test('finds a history that was rewritten, or has lost its end', async () => {
    const { key, sign } = scene.harness.deps.signer
    const noted = (name: string, size: number) => {
      const checkpoint = { origin: key.name, size, root: sha256(Buffer.from('another history')) }
      writeFileSync(join(folder, name), signCheckpoint(sha256, checkpoint, key, sign))
      return name
    }
    const forked = await run(['consistency', noted('forked.txt', 5), '--format', 'table'])
    expect(forked.code).toBe(16)
    expect(forked.stdout).toContain('history was rewritten')
    const longer = await run(['consistency', noted('longer.txt', 5_000)])
    expect(longer.code).toBe(16)
    expect(asJson(longer).message).toContain('its end was cut off')
  })

  test('files that are no checkpoint, or none at all, are trouble and no verdict', async () => {
    expect((await run(['consistency', 'ogee.pub'])).code).toBe(65)
    expect((await run(['consistency', 'none.txt'])).code).toBe(66)
  })
})

describe('ledger check', () => {
  const check = (...args: string[]) => run(['check', '--key', 'ogee.pub', '--against', 'all.txt', ...args])

  test('agrees with itself and with what was kept', async () => {
    const ran = await check()
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
    expect(asJson(ran)).toMatchObject({ ok: true, records: 5, kept: 2, found: 0, first: null })
    expect((await check('--format', 'table')).stdout).toMatch(
      /^✓ checks: everything agrees\nLedger {2,}test\/ledger\n/,
    )
    expect((await check('--no-receipts')).code).toBe(0)
  })

  test('names the record that was changed, with 16', async () => {
    await root.query('DROP TRIGGER records_no_update')
    const { id, number } = records[2]!
    await root.query("UPDATE records SET verdict = 'suspect' WHERE id = ?", [id])
    const ran = await check()
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 16, stderr: '' })
    const { first, found } = asJson(ran)
    expect(found).toBe(1)
    expect(first).toMatchObject({ what: 'row', record: id })
    expect(first.message).toContain(`record ${number}: verdict is stored as suspect, and was hashed as ok`)
    const table = await check('--format', 'table')
    expect(table.stdout).toMatch(/^✕ does not check, first:\n {2}Entry \d+, record/)
    expect(
      (await check('--format', 'ndjson')).stdout
        .trim()
        .split('\n')
        .map((line) => JSON.parse(line)),
    ).toEqual([first])
    await root.query("UPDATE records SET verdict = 'ok' WHERE id = ?", [id])
    expect((await check()).code).toBe(0)
  })

  test('needs the scope ledger:read for every design', async () => {
    const asking = async (scopes: Parameters<typeof addToken>[1], designs: string[] | null = null) => {
      const { token } = await addToken(scene.harness, scopes, null, { designs })
      const ran = await run(['check'], { env: { OGEE_TOKEN: token } })
      expect(problemOf(ran)).toMatchObject({ code: 'insufficient-scope' })
      return ran.code
    }
    expect(await asking(['trims:read-all'])).toBe(77)
    expect(await asking(['ledger:read'], ['U18'])).toBe(77)
  })
})

describe('ledger export', () => {
  const offline = (folder: string, ...more: string[]) =>
    ended(
      spawn(process.execPath, ['ogee.mjs', 'ledger', 'check', '.', '--key', 'ogee.pub', ...more], {
        cwd: folder,
        env: { OGEE_URL: 'http://ledger.invalid' },
      }),
    )
  let all = ''

  beforeAll(async () => {
    all = (await addToken(scene.harness, ['ledger:read', 'trims:read-all', 'designs:read'])).token
  })
  const exported = (folderName: string, ...filters: string[]) =>
    run(['export', folderName, '--key', 'ogee.pub', ...filters], { env: { OGEE_TOKEN: all } })

  test('makes a folder that checks without a server, by the program that lies in it', async () => {
    const ran = await exported('out')
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
    expect(asJson(ran)).toMatchObject({ ok: true, records: 5, revisions: 1 })
    const out = join(folder, 'out')
    const names =
      'README.txt checkpoints.txt designs keys.json ogee.mjs ogee.pub proofs.ndjson records.ndjson'
    expect(readdirSync(out).sort().join(' ')).toBe(names)
    const checked = await offline(out)
    expect({ code: checked.code, stderr: checked.stderr }).toEqual({ code: 0, stderr: '' })
    expect(asJson(checked)).toMatchObject({
      format: 'ogee.export-check/1',
      ok: true,
      records: 5,
      revisions: 1,
    })
    // Without a key that was kept, it says whose word it takes.
    const unkept = await run(['check', 'out'])
    expect({ code: unkept.code, stderr: unkept.stderr }).toEqual({
      code: 0,
      stderr: expect.stringContaining('out/ogee.pub is taken at its word'),
    })
    // The commands of its own README work as they stand.
    const lines = readFileSync(join(out, 'README.txt'), 'utf8')
      .split('\n')
      .filter((line) => /^(All|One)/.test(line))
    expect(lines).toHaveLength(2)
    for (const line of lines) {
      const command = line.replace(/^[^:]+: +/, '')
      const shell = spawn('bash', ['-c', command], { cwd: out, env: { PATH: process.env.PATH } })
      expect((await ended(shell)).code, command).toBe(0)
    }
  })

  test('compares no kept checkpoint and leaves out no receipts: 64 with the way to do it', async () => {
    const against = await offline(join(folder, 'out'), '--against', '../all.txt')
    expect({ code: against.code, stdout: against.stdout }).toEqual({ code: 64, stdout: '' })
    expect(against.stderr).toContain('ogee ledger consistency ../all.txt checkpoints.txt')
    expect((await run(['consistency', 'all.txt', 'out/checkpoints.txt'])).code).toBe(0)
    expect((await offline(join(folder, 'out'), '--no-receipts')).code).toBe(64)
  })

  test('takes the filters of history', async () => {
    expect(asJson(await exported('one', '--unit', 'L-2'))).toMatchObject({ records: 1 })
    const [line] = readFileSync(join(folder, 'one/records.ndjson'), 'utf8').split('\n')
    expect(JSON.parse(line!)).toMatchObject({ id: records[2]!.id, unit: 'L-2' })
  })

  test('what is changed in the folder later is found, with 16', async () => {
    const out = join(folder, 'one')
    const tampered = async (name: string, change: (text: string) => string, words: string) => {
      const path = join(out, name)
      const text = readFileSync(path, 'utf8')
      writeFileSync(path, change(text))
      const ran = await offline(out)
      expect({ name, code: ran.code }).toEqual({ name, code: 16 })
      expect(asJson(ran).first).toContain(words)
      writeFileSync(path, text)
      expect((await offline(out)).code).toBe(0)
    }
    await tampered(
      'records.ndjson',
      (text) => text.replace('"L-2"', '"L-3"'),
      'another record there than its proof',
    )
    await tampered('records.ndjson', (text) => `${text}${text}`, 'more lines')
    await tampered('records.ndjson', () => '', 'another record there than its proof')
    await tampered(
      'proofs.ndjson',
      (text) => text.replace('"index":', '"index":1'),
      'does not lead to the signed root',
    )
    await tampered('designs/U18-1.json', (text) => `${text} `, 'is not what was released')
    await tampered(
      'checkpoints.txt',
      (text) => text.replace(/\n(\d)\n/, '\n9$1\n'),
      'not signed by the ledger',
    )
  })

  test('writes into no folder that holds anything', async () => {
    const ran = await exported('out')
    expect({ code: ran.code, stdout: ran.stdout }).toEqual({ code: 73, stdout: '' })
  })
})

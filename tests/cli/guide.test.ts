import { spawn, spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, symlinkSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { buildCli } from '../../server/setup/build-cli.mjs'
import { type TestDatabase, testDatabase } from '../support/database.ts'
import { type ServerProcess, startServer } from '../support/server-process.ts'
import { ended } from './support/built-cli.ts'

/** The README's examples for callers, as they stand, against the built server with its demo data. */

const root = join(import.meta.dirname, '../..')
const folder = mkdtempSync(join(tmpdir(), 'ogee-guide-'))
const readme = readFileSync(join(root, 'README.md'), 'utf8')
const blocks = (language: string, title = 'Many units from a script') =>
  [...(readme.split(`\n## ${title}\n`)[1]?.split('\n## ')[0] ?? '').matchAll(/```(\w+)\n(.*?)```/gs)]
    .filter(([, of]) => of === language)
    .map(([, , code = '']) => code)
const hasPython = spawnSync('python3', ['--version']).status === 0

let database: TestDatabase
let server: ServerProcess

beforeAll(async () => {
  await buildCli(root, join(folder, 'dist/cli'))
  symlinkSync(join(root, 'package.json'), join(folder, 'package.json'))
  database = await testDatabase()
  server = await startServer({ databaseUrl: database.url, adminUrl: database.adminUrl })
}, 120_000)
afterAll(async () => {
  await server.remove()
  await database.drop()
  rmSync(folder, { recursive: true, force: true })
})

const run = async (command: string, input: string) => {
  const child = spawn(command, command === 'bash' ? ['-s'] : ['-'], {
    cwd: folder,
    env: {
      PATH: process.env.PATH ?? '',
      HOME: process.env.HOME ?? folder,
      XDG_CONFIG_HOME: join(folder, 'config'),
      OGEE_URL: server.url,
      OGEE_TOKEN: server.accounts().token,
    },
  })
  return await ended(child, input)
}

describe('the guide for callers', () => {
  test('sh: a batch from simulated points, then the codes of a unit', async () => {
    const [script = ''] = blocks('sh')
    const ran = await run('bash', script)
    expect(ran.stderr).toBe('')
    const [said, head, codes] = ran.stdout.split('\n')
    expect(said).toMatch(/^(all good|some units are not good)/)
    expect(head).toMatch(/^unit,channel,range,gain_code/)
    expect(codes).toMatch(/^S000001,1,u10,\d+,0x[0-9A-F]{3},/)
    // The same script again doubles nothing, and still says the same of every unit.
    const csv = () => readFileSync(join(folder, 'codes.csv'), 'utf8').trimEnd().split('\n')
    const first = csv()
    await run('bash', script)
    expect(csv().map((row) => row.split(',')[15])).toEqual(first.map((row) => row.split(',')[15]))
    expect(first).toHaveLength(21)
  })

  test('sh: key, checkpoint, proof and consistency', async () => {
    const [script = ''] = blocks('sh', 'Prove it years later')
    const ran = await run('bash', `set -e\n${script}`)
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
    const answers = ran.stdout.split(/(?<=^\})\n/m).filter((text) => text !== '')
    expect(answers.map((text) => JSON.parse(text).ok)).toEqual([true, true])
  })

  test('sh: found, trimmed and as left by way of a spool, with simulated units', async () => {
    const [script = ''] = blocks('sh', 'When the server is away, and as left')
    const ran = await run('bash', script)
    const rows = (name: string) => readFileSync(join(folder, name), 'utf8').trimEnd().split('\n').slice(1)
    expect(ran.code, ran.stderr).toBe(0)
    expect(rows('codes.csv')).toHaveLength(20)
    // Units that are out of reach have no codes and are not measured as left.
    const trimmed = rows('codes.csv').filter((row) => row.split(',')[7] !== '')
    expect(rows('as-left.csv')).toHaveLength(trimmed.length)
    const outcomes = new Set(rows('as-left.csv').map((row) => row.split(',')[5]))
    expect(
      [...outcomes].every((one) => /^(pass|fail|conditional-pass|conditional-fail)$/.test(one ?? '')),
    ).toBe(true)
    expect(outcomes).toContain('pass')
    expect(ran.stdout).toContain('"pending": 0')
  })

  test.runIf(hasPython)('python: one kept process, and plain HTTP', async () => {
    const [pipe = '', http = ''] = blocks('python')
    const first = await run('python3', pipe)
    expect([first.stderr, first.code]).toEqual(['', 0])
    expect(first.stdout).toMatch(/^\{'gain': '0x[0-9A-F]{3}', 'offset': '0x[0-9A-F]{3}'\}\n$/)
    const second = await run('python3', http)
    expect([second.stderr, second.code, second.stdout]).toEqual(['', 0, 'ok\n'])
    // Run again: the same key, the same record.
    expect((await run('python3', http)).stdout).toBe('ok\n')
  })
})

import { spawn } from 'node:child_process'
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs'
import { copyFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { memoryLedger, plainBodies } from '../support/memory-ledger.ts'
import { testKey } from '../support/server-crypto.ts'
import { builtCli, ended, problemOf } from './support/built-cli.ts'
import { FakeServer, json, problem } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const bodies = plainBodies(12)
const ledger = memoryLedger(bodies)
const stranger = memoryLedger(bodies, testKey())
let folder = ''
const file = (name: string, content: string | object) => {
  const path = join(folder, name)
  writeFileSync(path, typeof content === 'string' ? content : JSON.stringify(content))
  return path
}

beforeAll(async () => {
  await server.start()
  folder = mkdtempSync(join(tmpdir(), 'ogee-proof-'))
  file('ogee.pub', ledger.pub)
})
afterAll(async () => await server.stop())

const env = () => ({ OGEE_URL: server.url, OGEE_TOKEN: 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789' })
const run = (...args: string[]) => cli.run(args, { env: env(), cwd: folder })

describe('L7: a proof checks offline', () => {
  test('with the key and the file alone, from an empty folder, with nothing but the one program file', async () => {
    const empty = mkdtempSync(join(tmpdir(), 'ogee-alone-'))
    await copyFile(cli.path, join(empty, 'ogee.mjs'))
    writeFileSync(join(empty, 'ogee.pub'), ledger.pub)
    writeFileSync(join(empty, 'p.json'), JSON.stringify(ledger.proofOf(3)))
    expect(readdirSync(empty).sort()).toEqual(['ogee.mjs', 'ogee.pub', 'p.json'])
    // No server, no home, no configuration, and any connection would fail: the network's names lead nowhere.
    const child = spawn(process.execPath, ['ogee.mjs', 'proof', 'check', 'p.json', '--key', 'ogee.pub'], {
      cwd: empty,
      env: { OGEE_URL: 'http://ledger.invalid', HTTP_PROXY: 'http://127.0.0.1:1' },
    })
    const ran = await ended(child)
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
    expect(JSON.parse(ran.stdout)).toMatchObject({ ok: true, record: bodies[3]!.id, index: 4, size: 13 })
  })

  test('says what does not check, with 16 and the result on standard output', async () => {
    const proof = ledger.proofOf(3)
    const cases: [string, object, string][] = [
      ['changed', { ...proof, record: ledger.proofOf(4).record }, 'record'],
      ['moved', { ...proof, index: 5 }, 'path'],
      ['foreign', stranger.proofOf(3), 'key'],
      ['unsigned', { ...proof, checkpoint: proof.checkpoint.replace('\n13\n', '\n12\n') }, 'signature'],
      ['other', { format: 'something' }, 'form'],
    ]
    for (const [name, content, fault] of cases) {
      const ran = await run('proof', 'check', file(`${name}.json`, content), '--key', 'ogee.pub')
      expect({ name, code: ran.code, stderr: ran.stderr }).toEqual({ name, code: 16, stderr: '' })
      expect(JSON.parse(ran.stdout)).toMatchObject({ format: 'ogee.proof-check/1', ok: false, fault })
    }
    const table = await run('proof', 'check', 'moved.json', '--key', 'ogee.pub', '--format', 'table')
    expect(table.stdout).toContain(
      '✕ does not check\nThe leaf does not lead to the signed root.\nDo not rely',
    )
  })

  test('tells a missing or unreadable file from a proof that fails', async () => {
    const good = file('good.json', ledger.proofOf(0))
    const code = async (...args: string[]) => (await run('proof', 'check', ...args)).code
    expect(await code('none.json', '--key', 'ogee.pub')).toBe(66)
    expect(await code(good, '--key', 'none.pub')).toBe(66)
    expect(await code(good, '--key', good)).toBe(65)
    expect(await code(file('text.json', '{'), '--key', 'ogee.pub')).toBe(65)
    expect(await code(good)).toBe(64)
    const piped = await cli.run(['proof', 'check', '-', '--key', join(folder, 'ogee.pub')], {
      input: readFileSync(good),
    })
    expect(piped.code).toBe(0)
  })
})

describe('proof get', () => {
  test('writes what the server proves, as a file that checks', async () => {
    server.willAnswer(problem('not-in-ledger-yet', { 'retry-after': '0' }), json(200, ledger.proofOf(2)))
    const ran = await run('proof', 'get', bodies[2]!.id, '--output', 'out.json')
    expect({ code: ran.code, out: ran.stdout, err: ran.stderr }).toEqual({ code: 0, out: '', err: '' })
    expect(server.seen.map((seen) => seen.path)).toEqual(
      Array(2).fill(`/api/v1/ledger/proof/${bodies[2]!.id}`),
    )
    expect((await run('proof', 'check', 'out.json', '--key', 'ogee.pub')).code).toBe(0)
  })

  test('refuses a number in place of an id before it asks, and a record that is not there', async () => {
    server.willAnswer(problem('not-found'))
    expect((await run('proof', 'get', '1004317')).code).toBe(64)
    expect(server.seen).toEqual([])
    const ran = await run('proof', 'get', bodies[2]!.id)
    expect({ code: ran.code, out: ran.stdout }).toEqual({ code: 65, out: '' })
    expect(problemOf(ran)).toMatchObject({ code: 'not-found' })
  })
})

describe('proof receipts', () => {
  const spool = (name: string, receipts: readonly object[]) => {
    const sent = join(folder, name, 'sent')
    mkdirSync(sent, { recursive: true })
    receipts.forEach((receipt, i) => {
      writeFileSync(join(sent, `${i}.json`), JSON.stringify(receipt))
    })
    return name
  }
  const answerProofs = (change: (index: number) => object | null = () => null) =>
    server.willAnswer((seen, response) => {
      const index = bodies.findIndex((body) => seen.path.endsWith(body.id))
      const reply = seen.path.endsWith('/key')
        ? (_: unknown, to: typeof response) => to.setHeader('content-type', 'text/plain').end(ledger.pub)
        : index < 0
          ? problem('not-found')
          : json(200, change(index) ?? ledger.proofOf(index))
      reply(seen, response)
    })

  test('are all in the ledger, alone or within a record or what a spool keeps', async () => {
    answerProofs()
    const folderName = spool('s1', [
      ledger.receiptOf(0),
      { ...bodies[1], receipt: ledger.receiptOf(1) },
      { key: 'k', record: { receipt: ledger.receiptOf(2) } },
      { nothing: true },
    ])
    for (const key of [['--key', 'ogee.pub'], []]) {
      const ran = await run('proof', 'receipts', folderName, ...key)
      expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' })
      const { ok, receipts } = JSON.parse(ran.stdout)
      expect(ok).toBe(true)
      expect(receipts.map((one: { index: number }) => one.index)).toEqual([1, 2, 3])
    }
  })

  test('names each that is not, with 16', async () => {
    answerProofs((index) => (index === 1 ? stranger.proofOf(1) : index === 2 ? ledger.proofOf(3) : null))
    const gone = { ...ledger.receiptOf(0), record: '01890a5d-ac96-774b-bcce-ffffffffffff' }
    const foreign = stranger.receiptOf(4)
    const name = spool('s2', [ledger.receiptOf(0), ledger.receiptOf(1), ledger.receiptOf(2), gone, foreign])
    const ran = await run('proof', 'receipts', name, '--key', 'ogee.pub', '--format', 'ndjson')
    expect(ran.code).toBe(16)
    const lines = ran.stdout
      .trim()
      .split('\n')
      .map((line) => JSON.parse(line))
    expect(lines.map((line) => line.fault ?? 'ok')).toEqual(['ok', 'key', 'other', 'missing', 'receipt'])
  })

  test('not yet in the ledger is trouble before the promised time, and a broken promise after it', async () => {
    const soon = memoryLedger([{ ...bodies[0]!, recordedAt: new Date().toISOString() }])
    server.willAnswer(problem('not-in-ledger-yet', { 'retry-after': '0' }))
    const early = spool('s3', [soon.receiptOf(0)])
    expect((await run('proof', 'receipts', early, '--key', 'ogee.pub')).code).toBe(75)
    const late = spool('s4', [ledger.receiptOf(0)])
    const ran = await run('proof', 'receipts', late, '--key', 'ogee.pub')
    expect(ran.code).toBe(16)
    expect(JSON.parse(ran.stdout).receipts[0]).toMatchObject({ fault: 'missing' })
  })

  test('a folder without any is input that is missing', async () => {
    mkdirSync(join(folder, 'empty'), { recursive: true })
    expect((await run('proof', 'receipts', 'empty', '--key', 'ogee.pub')).code).toBe(66)
    expect((await run('proof', 'receipts', 'nowhere', '--key', 'ogee.pub')).code).toBe(66)
  })
})

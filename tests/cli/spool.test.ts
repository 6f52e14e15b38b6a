import { once } from 'node:events'
import fs from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { sha256 } from '../../server/ledger/crypto.ts'
import { startSequencer } from '../../server/ledger/sequencer.ts'
import type { Record as StoredRecord } from '../../shared/contract/record.ts'
import { verifierKey } from '../../shared/ledger/checkpoint.ts'
import { seededRandom } from '../support/random.ts'
import { testKey } from '../support/server-crypto.ts'
import { pointsOf, suspectPoints, unipolar } from '../support/server-factories.ts'
import { addDesign, addStation, addToken, type Harness, serverHarness } from '../support/server-harness.ts'
import { type Fate, startProxy, type TcpProxy } from '../support/tcp-proxy.ts'
import { builtCli, problemOf, type RunOptions } from './support/built-cli.ts'

/** The spool on a real server, behind a line that can be cut. */

const cli = builtCli()
let harness: Harness
let proxy: TcpProxy
let token = ''
let stationId = ''
let fate: Fate = 'pass'
let spool = ''
let count = 0

beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  await addDesign(harness, 'TWO', unipolar({ channels: ['a', 'b'] }))
  const station = await addStation(harness, 'Line 1')
  stationId = station.id
  token = (await addToken(harness, ['trims:write', 'trims:read', 'designs:read'], station.id)).token
  proxy = await startProxy(harness.port, seededRandom(1), () => fate)
})
afterAll(async () => {
  await proxy.close()
  await harness.close()
})
beforeEach(() => {
  fate = 'pass'
  count += 1
  spool = join(cli.folder, `spool-${count}`)
})

const env = () => ({
  OGEE_URL: `http://127.0.0.1:${proxy.port}`,
  OGEE_TOKEN: token,
  XDG_CACHE_HOME: join(cli.folder, 'cache'),
})
const run = (args: readonly string[], options: RunOptions = {}) =>
  cli.run(args, { ...options, env: { ...env(), ...options.env } })
const csvOf = (points: readonly { code: number; measured: number; uncertainty: number }[]) =>
  `code,measured,uncertainty\n${points.map((p) => `${p.code},${p.measured},${p.uncertainty}`).join('\n')}\n`
const trim = (unit: string, gainPpm = -203, more: readonly string[] = [], options: RunOptions = {}) =>
  run(
    [
      'trim',
      '--design',
      'U18',
      '--unit',
      unit,
      '--applied',
      'neutral',
      '--points',
      '-',
      '--spool',
      spool,
      ...more,
    ],
    { input: csvOf(pointsOf({ gainPpm, offsetV: 2e-6 })), ...options },
  )
const names = (place: string) =>
  fs.existsSync(join(spool, place)) ? fs.readdirSync(join(spool, place)).sort() : []
const entries = (place: string) =>
  names(place)
    .filter((name) => !name.endsWith('.problem.json'))
    .map((name) => JSON.parse(fs.readFileSync(join(spool, place, name), 'utf8')))
const recordsOf = async (unit: string) =>
  (await harness.database.models.records.findAll({ where: { unit }, order: ['recordedAt', 'id'] })).map(
    (one) => one.get(),
  )
const send = (more: readonly string[] = []) => run(['spool', 'send', spool, ...more])
const parsed = (text: string) =>
  JSON.parse(text) as StoredRecord & { spooled: string; result: { trim: { codes: unknown } } }

describe('a trim with --spool', () => {
  test('goes to the server while it answers, and keeps the released revision with its hash', async () => {
    const ran = await trim('S-1')
    expect([ran.code, ran.stderr]).toEqual([0, ''])
    expect(parsed(ran.stdout).id).toEqual(expect.any(String))
    expect(names('pending')).toEqual([])
    const [file] = fs
      .readdirSync(join(cli.folder, 'cache/ogee', `127.0.0.1_${proxy.port}`))
      .filter((name) => name.startsWith('readRevision-'))
    const path = join(cli.folder, 'cache/ogee', `127.0.0.1_${proxy.port}`, file ?? '')
    const kept = JSON.parse(fs.readFileSync(path, 'utf8')).reply
    expect(kept.hash).toBe(parsed(ran.stdout).designHash)
    expect(fs.readFileSync(join(spool, 'ogee.pub'), 'utf8')).toMatch(/^test\/ledger\+/)
  })

  test('without the server prints the same object with id null and its file, and ends with its verdict', async () => {
    const online = parsed((await trim('S-2')).stdout)
    fate = 'reset'
    const ran = await trim('S-3')
    expect(ran.code).toBe(0)
    const printed = parsed(ran.stdout)
    expect(printed).toMatchObject({ format: 'ogee.record/1', id: null, unit: 'S-3', number: null, pass: 1 })
    expect(printed.result).toEqual(online.result)
    expect(printed.spooled).toBe(join(spool, 'pending', names('pending')[0] ?? ''))
    const suspect = await run(
      ['trim', '--design', 'U18', '--unit', 'S-4', '--applied', 'neutral', '--points', '-', '--spool', spool],
      { input: csvOf(suspectPoints()) },
    )
    expect(suspect.code).toBe(12)
    const shown = await trim('S-5', -203, ['--format', 'table'])
    expect(shown.stdout).toContain('Not yet sent.')
    expect(entries('pending').map(({ body }) => body.unit)).toEqual(['S-3', 'S-4', 'S-5'])
    expect(entries('pending')[0].body.claimed).toMatchObject({ codes: printed.result.trim.codes })
    for (const name of names('pending')) {
      expect(fs.statSync(join(spool, 'pending', name)).mode & 0o777).toBe(0o600)
    }
  })

  test('the same command again doubles nothing: off line, then on line, by spool and by itself', async () => {
    fate = 'reset'
    const first = await trim('S-6')
    const again = await trim('S-6')
    expect(again.stdout).toBe(first.stdout)
    expect(names('pending')).toHaveLength(1)
    fate = 'pass'
    const online = await trim('S-6')
    expect(parsed(online.stdout).notices.map(({ code }) => code)).toContain('replayed')
    expect(await send()).toMatchObject({ code: 0 })
    expect(await recordsOf('S-6')).toHaveLength(1)
    expect(parsed(online.stdout).claimed).toMatchObject({ codes: parsed(first.stdout).result.trim.codes })
  })

  test('what waits goes first, so that a second pass follows the first', async () => {
    fate = 'reset'
    const first = parsed((await trim('S-7', -300)).stdout)
    fate = 'pass'
    const { gain, offset } = first.result.trim.codes as { gain: number; offset: number }
    const next = await run(
      [
        'trim --design U18 --unit S-7 --follows last --points - --spool',
        spool,
        `--applied gain=${gain},offset=${offset}`,
      ].flatMap((part) => (part === spool ? [part] : part.split(' '))),
      { input: csvOf(pointsOf({ gainPpm: 3 })) },
    )
    expect(parsed(next.stdout)).toMatchObject({ pass: 2, notices: [] })
    expect((await recordsOf('S-7')).map(({ pass }) => pass)).toEqual([1, 2])
    expect(names('pending')).toEqual([])
  })

  test('codes that the spool gave out are not forgotten: nothing said about them is refused here', async () => {
    fate = 'reset'
    const unsaid = ['trim', '--design', 'U18', '--unit', 'S-8', '--points', '-', '--spool', spool]
    const first = await run(unsaid, { input: csvOf(pointsOf({ gainPpm: -90 })) })
    expect(first.code).toBe(0)
    expect(first.stderr).toContain('neutral was assumed')
    const second = await run(unsaid, { input: csvOf(pointsOf({ gainPpm: 2 })) })
    expect(problemOf(second)).toMatchObject({ code: 'applied-required', exit: 65 })
  })

  test('without a kept revision it ends with 69 and puts nothing down', async () => {
    fate = 'reset'
    const ran = await run(
      ['trim', '--design', 'TWO', '--channel', 'a', '--unit', 'S-9', '--points', '-', '--spool', spool],
      { input: csvOf(pointsOf()), env: { XDG_CACHE_HOME: join(cli.folder, 'empty') } },
    )
    expect(problemOf(ran)).toMatchObject({ code: 'server-unreachable', exit: 69 })
    expect(ran.stdout).toBe('')
    expect(names('pending')).toEqual([])
  })

  test('what only the record before can tell is no fault of the unit: 69, in a batch not refused', async () => {
    await trim('S-13')
    fate = 'reset'
    const learned = ['--effects', 'learned', '--follows', 'last']
    const ran = await trim('S-13', -203, learned)
    expect(problemOf(ran)).toMatchObject({ code: 'server-unreachable', exit: 69 })
    const line = (unit: string, more: object) =>
      JSON.stringify({ unit, applied: 'neutral', points: pointsOf({ gainPpm: -150 }), ...more })
    const input = `${line('S-14', {})}\n${line('S-13', { effects: 'learned', follows: 'last' })}\n`
    const batch = await run(['batch', '-', '--design', 'U18', '--spool', spool, '--format', 'json'], {
      input,
    })
    expect(problemOf(batch)).toMatchObject({
      code: 'answer-cut',
      exit: 75,
      facts: { done: 1, notDone: 1, firstNotDone: 2 },
    })
    expect(JSON.parse(batch.stdout).lines).toHaveLength(1)
    expect(names('pending')).toHaveLength(1)
  })

  test('a kept revision that was tampered with is not computed with', async () => {
    await trim('S-10')
    const folder = join(cli.folder, 'cache/ogee', `127.0.0.1_${proxy.port}`)
    const other = join(cli.folder, 'tampered')
    fs.cpSync(join(cli.folder, 'cache'), other, { recursive: true })
    for (const name of fs.readdirSync(folder).filter((one) => one.startsWith('readRevision-'))) {
      const path = join(other, 'ogee', `127.0.0.1_${proxy.port}`, name)
      const kept = JSON.parse(fs.readFileSync(path, 'utf8'))
      const text = Buffer.from(kept.reply.bytes, 'base64').toString('utf8').replace('0.00208', '0.00218')
      kept.reply.bytes = Buffer.from(text).toString('base64')
      fs.writeFileSync(path, JSON.stringify(kept))
    }
    fate = 'reset'
    const ran = await trim('S-11', -203, [], { env: { XDG_CACHE_HOME: other } })
    expect(problemOf(ran)).toMatchObject({ code: 'defect', exit: 70 })
    expect(names('pending')).toEqual([])
  })

  test('a refusal is a refusal, on line as well: nothing is put down for it', async () => {
    const ran = await trim('S-12', -203, ['--range', 'none'])
    expect(problemOf(ran)).toMatchObject({ code: 'range-unknown', exit: 65 })
    expect(names('pending')).toEqual([])
  })
})

describe('spool send', () => {
  test('sends in order, keeps each until a later checkpoint includes it, and lets go then', async () => {
    fate = 'reset'
    for (const unit of ['T-1', 'T-2', 'T-3']) await trim(unit)
    fate = 'pass'
    await harness.sequencer.stop()
    try {
      const ran = await send()
      expect(ran.code).toBe(0)
      const told = JSON.parse(ran.stdout)
      expect(told.sent.map((line: { unit: string }) => line.unit)).toEqual(['T-1', 'T-2', 'T-3'])
      expect(told).toMatchObject({ dropped: 0, waiting: 3, left: { pending: 0, sent: 3 } })
      expect(entries('sent').every(({ receipt }) => receipt.format === 'ogee.receipt/1')).toBe(true)
    } finally {
      const { deps, database } = harness
      const sequencer = startSequencer(database, deps.signer, deps.now, deps.logger)
      harness.sequencer.notify = sequencer.notify
      deps.notifyLedger = sequencer.notify
      harness.sequencer.stop = sequencer.stop
      sequencer.notify()
    }
    const again = JSON.parse((await send()).stdout)
    expect(again).toMatchObject({ dropped: 3, waiting: 0, left: { pending: 0, sent: 0 } })
    const times = await Promise.all(
      ['T-1', 'T-2', 'T-3'].map(async (unit) => (await recordsOf(unit))[0]!.number),
    )
    expect([...times].sort((a, b) => a - b)).toEqual(times)
  })

  test('a receipt that another key signed is not believed: 16, and the entry stays', async () => {
    fate = 'reset'
    await trim('T-4')
    fate = 'pass'
    const { key } = testKey('test/ledger')
    fs.writeFileSync(join(spool, 'ogee.pub'), `${verifierKey(sha256, key)}\n`)
    const ran = await send()
    expect(ran.code).toBe(16)
    expect(ran.stderr).toContain('Signed with another key than the one kept here.')
    expect(await recordsOf('T-4')).toHaveLength(1)
    expect([names('pending'), names('sent')].map((all) => all.length)).toEqual([0, 1])
  })

  test('that nothing can be proven is said, with 77 where the token may not; a spoiled file is named', async () => {
    fate = 'reset'
    await trim('T-13')
    fate = 'pass'
    const mayOnlyWrite = (await addToken(harness, ['trims:write'], stationId)).token
    const ran = await run(['spool', 'send', spool], { env: { OGEE_TOKEN: mayOnlyWrite } })
    expect({ code: ran.code, told: JSON.parse(ran.stdout) }).toMatchObject({
      code: 77,
      told: { sent: [{ unit: 'T-13', exit: 0 }], stopped: { code: 'insufficient-scope' }, left: { sent: 1 } },
    })
    expect(ran.stderr).toContain('could not be proven')
    const [name = ''] = names('sent')
    const spoiled = name.replace(/^\d{4}/, '0001')
    fs.writeFileSync(join(spool, 'sent', spoiled), '{"half')
    const again = await send()
    expect(again.code).toBe(16)
    expect(JSON.parse(again.stdout)).toMatchObject({
      dropped: 1,
      stopped: null,
      faults: [{ name: spoiled, record: null }],
      left: { sent: 1 },
    })
    expect(again.stderr).toContain(`sent/${spoiled}`)
  })

  test('what the server refuses stands in refused/ with its problem, and holds nothing else up', async () => {
    fate = 'reset'
    await trim('T-5')
    const bad = names('pending')[0] ?? ''
    const path = join(spool, 'pending', bad)
    const entry = JSON.parse(fs.readFileSync(path, 'utf8'))
    fs.writeFileSync(path, JSON.stringify({ ...entry, body: { ...entry.body, lot: 'NO-LOT' } }))
    await trim('T-6')
    fate = 'pass'
    const ran = await send()
    expect(ran.code).toBe(20)
    expect(new Set(names('refused'))).toEqual(new Set([bad, bad.replace('.json', '.problem.json')]))
    const problem = JSON.parse(
      fs.readFileSync(join(spool, 'refused', bad.replace('.json', '.problem.json')), 'utf8'),
    )
    expect(problem).toMatchObject({ code: 'lot-unknown', exit: 65 })
    expect(await recordsOf('T-6')).toHaveLength(1)
    const listed = JSON.parse((await run(['spool', 'list', spool])).stdout)
    expect(listed).toMatchObject({ pending: 0, refused: 1 })
  })

  test('a file that somebody spoiled is set aside and named', async () => {
    fate = 'reset'
    await trim('T-7')
    await trim('T-8')
    fs.writeFileSync(join(spool, 'pending', names('pending')[0] ?? ''), '{"half')
    fate = 'pass'
    expect((await send()).code).toBe(20)
    expect(names('refused')).toHaveLength(2)
    expect(await recordsOf('T-8')).toHaveLength(1)
  })

  test('while the server is away: 69, a revoked token: 77; everything waits on', async () => {
    fate = 'reset'
    await trim('T-9')
    expect(problemOf(await send())).toMatchObject({
      code: 'server-unreachable',
      exit: 69,
      facts: { left: 1 },
    })
    fate = 'pass'
    const wrong = 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789'
    const ran = await run(['spool', 'send', spool], { env: { OGEE_TOKEN: wrong } })
    expect(ran.code).toBe(77)
    expect(ran.stderr).not.toContain(wrong)
    expect(names('pending')).toHaveLength(1)
    expect((await run(['spool', 'send', join(cli.folder, 'nothing')])).code).toBe(66)
  })

  test('an answer that was lost is found again by its key', async () => {
    fate = 'reset'
    await trim('T-10')
    fate = 'cut-answer'
    expect((await send()).code).toBe(75)
    fate = 'pass'
    expect((await send()).code).toBe(0)
    expect(await recordsOf('T-10')).toHaveLength(1)
  })

  test('order is that of writing, whatever the clock says', async () => {
    fate = 'reset'
    await trim('T-11')
    // A clock that goes back by a year must not put the next one first.
    const [first] = names('pending')
    const old = new Date(Date.now() + 365 * 86_400_000)
    fs.utimesSync(join(spool, 'pending', first ?? ''), old, old)
    await trim('T-12')
    fate = 'pass'
    const { sent } = JSON.parse((await send()).stdout)
    expect(sent.map((line: { unit: string }) => line.unit)).toEqual(['T-11', 'T-12'])
  })

  test('several processes share a folder: each measurement once', async () => {
    fate = 'reset'
    await Promise.all(Array.from({ length: 6 }, (_, i) => trim(`T-2${i}`)))
    expect(names('pending')).toHaveLength(6)
    fate = 'pass'
    const ran = await Promise.all([send(), send()])
    expect(ran.map(({ code }) => code)).toEqual([0, 0])
    for (let i = 0; i < 6; i++) expect(await recordsOf(`T-2${i}`)).toHaveLength(1)
  })

  test('a sender that was killed holds nobody up', async () => {
    fate = 'reset'
    await trim('T-30')
    fate = 'pass'
    const child = cli.start(['--version'], { env: env() })
    await once(child, 'exit')
    fs.writeFileSync(join(spool, 'sending.lock'), String(child.pid))
    expect((await send()).code).toBe(0)
    expect(await recordsOf('T-30')).toHaveLength(1)
  })
})

describe('check and batch with --spool', () => {
  test('a check is judged by the kept revision, and recorded later', async () => {
    await trim('B-1')
    fate = 'reset'
    const ran = await run(['check', '--design', 'U18', '--unit', 'B-1', '--points', '-', '--spool', spool], {
      input: csvOf(pointsOf({ gainPpm: 0.2 })),
    })
    expect(ran.code).toBe(0)
    expect(JSON.parse(ran.stdout)).toMatchObject({ id: null, kind: 'verify', verdict: 'pass' })
    fate = 'pass'
    expect((await send()).code).toBe(0)
    expect((await recordsOf('B-1')).map(({ kind }) => kind)).toEqual(['trim', 'verify'])
  })

  test('a batch goes on without the server, in order; the same file again doubles nothing', async () => {
    await trim('B-2')
    const units = Array.from({ length: 30 }, (_, i) => `C-${String(i).padStart(2, '0')}`)
    const rows = units.flatMap((unit) =>
      pointsOf({ gainPpm: -150 }).map((p) => `${unit},${p.code},${p.measured},${p.uncertainty}`),
    )
    const input = `unit,code,measured,uncertainty\n${rows.join('\n')}\nC-bad,0,nonsense,1e-6\n`
    const batch = () =>
      run(['batch', '-', '--design', 'U18', '--applied', 'neutral', '--spool', spool, '--format', 'json'], {
        input,
      })
    fate = 'reset'
    const first = await batch()
    expect(first.code).toBe(20)
    const told = JSON.parse(first.stdout)
    expect(told.summary).toMatchObject({ lines: 31, good: 30, notGood: 1, spooled: 30 })
    expect(entries('pending').map(({ body }) => body.unit)).toEqual(units)
    await batch()
    expect(names('pending')).toHaveLength(30)
    fate = 'pass'
    const online = JSON.parse((await batch()).stdout)
    expect(online.summary).toMatchObject({ good: 30, replayed: 30, spooled: 0 })
    for (const unit of units) expect(await recordsOf(unit)).toHaveLength(1)
  })
})

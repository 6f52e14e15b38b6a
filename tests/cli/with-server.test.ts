import { createHash } from 'node:crypto'
import { chmodSync, copyFileSync, mkdirSync, readFileSync, statSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { instrumentUsed } from '../../cli/instrument-used.ts'
import { record } from '../../shared/contract/record.ts'
import { canonicalBytes, type Json } from '../../shared/ledger/canonical.ts'
import { lotLine } from '../support/lot-fixtures.ts'
import {
  designBytes,
  examplePoints,
  line,
  me,
  recordIds,
  recordOf,
  revision,
  unit,
} from './support/answers.ts'
import { builtCli, examples, problemOf, type RunOptions } from './support/built-cli.ts'
import { FakeServer, json, problem, type Reply } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const token = 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789'
const secret = 'abcdefghijklmnop'
const hash = createHash('sha256').update(designBytes).digest('hex')
const recorded: Reply = (seen, response) => json(201, recordOf(seen))(seen, response)

beforeAll(async () => {
  await server.start()
  mkdirSync(cli.folder, { recursive: true })
  copyFileSync(join(examples, 'unipolar-18.points.csv'), join(cli.folder, 'points.csv'))
})
afterAll(async () => await server.stop())
beforeEach(() => server.willAnswer(recorded))

const run = async (args: readonly string[], options: RunOptions = {}) => {
  const ran = await cli.run(args, {
    ...options,
    env: { OGEE_URL: server.url, OGEE_TOKEN: token, ...options.env },
  })
  expect(ran.stdout + ran.stderr).not.toContain(secret)
  return ran
}
const trim = ['trim', '--design', 'DBS-A', '--unit', '031', '--points', 'points.csv']

describe('trim', () => {
  test('sends what was said and nothing else, prints the record, ends with its verdict', async () => {
    const ran = await run(trim)
    expect(ran.code).toBe(0)
    expect(ran.stderr).toBe('')
    expect(record.parse(JSON.parse(ran.stdout)).result).toMatchObject({
      trim: { codes: { gain: 2593, offset: 2048 } },
    })
    expect(server.seen).toHaveLength(1)
    expect(server.seen[0]).toMatchObject({
      method: 'POST',
      path: '/api/v1/trims',
      authorization: `Bearer ${token}`,
    })
    expect(server.seen[0]?.body).toEqual({ design: 'DBS-A', unit: '031', points: examplePoints })
  })

  test('the key is the hash of the request: the same command again has the same, another has another', async () => {
    await run(trim)
    await run(trim, { input: readFileSync(join(examples, 'unipolar-18.points.csv')) })
    await run([...trim.slice(0, -1), '-'], { input: readFileSync(join(examples, 'unipolar-18.points.csv')) })
    await run([...trim, '--measured-at', '2026-03-02T14:07:31+01:00'])
    await run([...trim, '--key', 'mine-1'])
    const keys = server.seen.map(({ key }) => key)
    const body = server.seen[0]?.body as Json
    expect(keys[0]).toBe(`ogee1-${createHash('sha256').update(canonicalBytes(body)).digest('base64url')}`)
    expect(keys[1]).toBe(keys[0])
    expect(keys[2]).toBe(keys[0])
    expect(keys[3]).not.toBe(keys[0])
    expect(keys[4]).toBe('mine-1')
  })

  test('every unit flag reaches its place in the request', async () => {
    const flags =
      '--revision 2 --lot L7 --channel 1 --range u10 --applied gain=2593,offset=2048 --effects learned --follows last ' +
      '--instrument DMM-07 --temperature 23.4 --note n --measured-at 2026-03-02T14:07:31+01:00'
    await run([...trim, ...flags.split(' ')])
    expect(server.seen[0]?.body).toEqual({
      design: 'DBS-A',
      revision: 2,
      unit: '031',
      lot: 'L7',
      channel: '1',
      range: 'u10',
      applied: { gain: 2593, offset: 2048 },
      effects: 'learned',
      points: examplePoints,
      conditions: { temperatureC: 23.4, instrument: 'DMM-07', note: 'n' },
      measuredAt: '2026-03-02T14:07:31+01:00',
      follows: 'last',
    })
  })

  test('columns of the points say the same as flags, and the key column is the key', async () => {
    const rows = examplePoints.map(
      ({ code, measured }) => `032,1,u10,L7,2593,2048,DMM-07,k32,${code},${measured}`,
    )
    const csv = `unit,channel,range,lot,applied_gain,applied_offset,instrument,key,code,measured\n${rows.join('\n')}\n`
    await run(['trim', '--design', 'DBS-A', '--points', '-'], { input: csv })
    expect(server.seen[0]).toMatchObject({
      key: 'k32',
      body: {
        unit: '032',
        channel: '1',
        range: 'u10',
        lot: 'L7',
        applied: { gain: 2593, offset: 2048 },
        conditions: { instrument: 'DMM-07' },
      },
    })
    const ran = await run(['trim', '--design', 'DBS-A', '--unit', '031', '--points', '-'], { input: csv })
    expect(problemOf(ran)).toMatchObject({ code: 'invalid-request', exit: 65 })
    expect(server.seen).toHaveLength(1)
  })

  test('the lot alone says which design', async () => {
    const lots = (design: string) => ({
      items: [lotLine({ key: 'L7', design })],
      next: null,
    })
    server.willAnswer(json(200, lots('DBS-C')), recorded)
    await run(['trim', '--lot', 'L7', '--unit', '031', '--points', 'points.csv'])
    expect(server.seen.at(-1)?.body).toMatchObject({ design: 'DBS-C', lot: 'L7' })
    server.willAnswer(json(200, { items: [], next: null }))
    const ran = await run(['trim', '--lot', 'L9', '--unit', '031', '--points', 'points.csv'])
    expect(problemOf(ran)).toMatchObject({ code: 'lot-unknown', exit: 65 })
  })

  test.each([
    ['out-of-reach', 10],
    ['too-coarse', 11],
    ['suspect', 12],
  ] as const)('%s: the record is printed and the exit code says it', async (verdict, exit) => {
    server.willAnswer((seen, response) =>
      json(201, { ...recordOf(seen), verdict, accepted: false })(seen, response),
    )
    const ran = await run(trim)
    expect(ran.code).toBe(exit)
    expect(JSON.parse(ran.stdout)).toMatchObject({ verdict })
  })

  test('notices are said on standard error; the answer stays whole', async () => {
    const notices = [{ code: 'replayed', message: 'This was recorded before, as 1 004 317.' }]
    server.willAnswer((seen, response) => json(201, { ...recordOf(seen), notices, extra: 1 })(seen, response))
    const ran = await run(trim)
    expect(ran.stderr).toBe('ogee: This was recorded before, as 1 004 317.\n')
    expect(JSON.parse(ran.stdout)).toMatchObject({ notices, extra: 1 })
  })

  test('each format', async () => {
    const csv = await run([...trim, '--format', 'csv'])
    expect(csv.stdout).toMatch(
      /^unit,channel,range,pass,verdict,accepted,gain_code,.*,record\n031,1,u10,1,ok,true,2593,0xA21,2048,0x800,/,
    )
    expect(csv.stdout).toContain(recordIds[0])
    const table = await run([...trim, '--format', 'table'])
    expect(table.stdout).toContain('Recorded as 1 004 317 at 2026-03-02T14:09:40Z.')
    expect(table.stdout).toMatch(/^Code +2593 +2048$/m)
    expect(table.stderr).toContain('Make safe what it drives first.')
    const ndjson = await run([...trim, '--format', 'ndjson'])
    expect(ndjson.stdout.trimEnd().split('\n')).toHaveLength(1)
  })

  test('503 and then success: one record, and the exit code of the verdict', async () => {
    server.willAnswer(problem('database-unavailable', { 'retry-after': '0' }), recorded)
    const ran = await run(trim)
    expect(ran.code).toBe(0)
    expect(server.seen.map(({ key }) => key)).toEqual([server.seen[0]?.key, server.seen[0]?.key])
  })

  test.each([
    ['token-invalid', 77],
    ['insufficient-scope', 77],
    ['idempotency-key-reused', 65],
    ['not-found', 65],
    ['applied-required', 65],
    ['revision-withdrawn', 65],
    ['defect', 70],
  ] as const)('%s: %i, the problem last, nothing on standard output', async (code, exit) => {
    server.willAnswer(problem(code))
    const ran = await run(trim)
    expect([ran.code, ran.stdout]).toEqual([exit, ''])
    expect(problemOf(ran)).toMatchObject({ code, exit, type: `/problems/${code}` })
  })

  test('what can be seen to be wrong is not sent', async () => {
    for (const [flags, path] of [
      [['--unit', ' 031'], '/unit'],
      [['--measured-at', 'yesterday'], '/measuredAt'],
      [['--follows', 'first'], '/follows'],
    ] as const) {
      const ran = await run([...trim, ...flags])
      expect(ran.code).toBe(65)
      expect(problemOf(ran)).toMatchObject({
        code: 'invalid-request',
        errors: expect.arrayContaining([expect.objectContaining({ path })]) as unknown,
      })
    }
    expect((await run([...trim, '--temperature', '23 V'])).code).toBe(65)
    expect((await run(['trim', '--design', 'DBS-A', '--points', 'points.csv'])).code).toBe(64)
    expect(server.seen).toHaveLength(0)
  })

  test('busy for longer than we wait: 75', async () => {
    server.willAnswer(problem('too-many-requests', { 'retry-after': '3600' }))
    const ran = await run(trim)
    expect([ran.code, ran.stdout]).toEqual([75, ''])
    expect(problemOf(ran)).toMatchObject({ code: 'too-many-requests', exit: 75 })
    expect(server.seen).toHaveLength(1)
  })

  test('nobody there: 69, after all tries', async () => {
    const ran = await run(trim, { env: { OGEE_URL: 'http://127.0.0.1:9' } })
    expect(ran.code).toBe(69)
    expect(problemOf(ran)).toMatchObject({ code: 'server-unreachable', exit: 69 })
  })
})

describe('trim --dry-run', () => {
  const answers = (current: typeof unit.current) => [
    json(200, revision(hash)),
    json(200, { items: current.length > 0 ? [{ ...unit, current }] : [], next: null }),
    json(200, recordOf({ body: { unit: '031', points: examplePoints } })),
  ]
  const dry = [...trim, '--dry-run']

  test('asks and never writes; the shape is a record without an id', async () => {
    server.willAnswer(...answers([]))
    const ran = await run(dry)
    expect(ran.code).toBe(0)
    expect(server.seen.map(({ method }) => method)).toEqual(['GET', 'GET'])
    expect(JSON.parse(ran.stdout)).toMatchObject({
      format: 'ogee.record/1',
      id: null,
      dryRun: true,
      unit: '031',
      channel: '1',
      range: 'u10',
      revision: 1,
      designHash: hash,
      applied: 'neutral',
      pass: 1,
      verdict: 'ok',
      result: { trim: { codes: { gain: 2593, offset: 2048 } } },
    })
    server.willAnswer(...answers([]))
    expect((await run([...dry, '--format', 'table'])).stdout).toContain('Not recorded: a dry run.')
  })

  const meter = (change: object) => ({
    id: 'DMM-07',
    serial: 'QX-1',
    title: 'Meter',
    gainPpm: 4,
    offsetV: 1e-6,
    calibratedOn: '2025-01-01',
    dueOn: '2025-12-31',
    createdAt: '2025-01-01T00:00:00Z',
    changedAt: '2025-01-01T00:00:00Z',
    changedBy: 'S. Brandt',
    retiredAt: null,
    etag: '"1"',
    ...change,
  })
  test.each([
    ['instrument-overdue', {}, []],
    ['instrument-retired', { dueOn: '2199-01-01', retiredAt: '2025-06-01T00:00:00Z' }, []],
    ['instrument-unknown', { id: 'DMM-08' }, []],
    [null, {}, ['--measured-at', '2025-12-31T23:00:00Z']],
  ])('an instrument is judged as the server does: %s', async (code, change, more) => {
    const list = json(200, { items: [meter(change)], overdueAllowed: false })
    server.willAnswer(...answers([]).slice(0, 2), list)
    const ran = await run([...dry, '--instrument', 'DMM-07', ...more])
    if (code !== null) expect(problemOf(ran)).toMatchObject({ code, exit: 65 })
    else {
      expect(ran.code).toBe(0)
      expect(JSON.parse(ran.stdout).result.fit.instrument).toEqual({
        id: 'DMM-07',
        gainPpm: 4,
        offsetV: 1e-6,
      })
    }
  })

  test('where nobody says when, an instrument is judged by when the last point was read', async () => {
    const client = { call: async () => ({ items: [meter({})], overdueAllowed: false }) as never }
    const body = { design: 'D', unit: 'u', conditions: { instrument: 'DMM-07' } }
    const points = ['2025-12-30T08:00:00Z', '2025-12-31T23:00:00Z'].map((readAt) => ({
      code: 1,
      measured: 1,
      readAt,
    }))
    const now = Date.parse('2026-02-01T00:00:00Z')
    expect(await instrumentUsed(client, { ...body, points }, now)).toMatchObject({ notices: [] })
    await expect(instrumentUsed(client, body, now)).rejects.toMatchObject({ code: 'instrument-overdue' })
  })

  test('an overdue instrument where the site allows it: the record would say so', async () => {
    const list = json(200, { items: [meter({})], overdueAllowed: true })
    server.willAnswer(...answers([]).slice(0, 2), list)
    const ran = await run([...dry, '--instrument', 'DMM-07'])
    expect(JSON.parse(ran.stdout).notices).toMatchObject([{ code: 'instrument-overdue' }])
  })

  test('loaded codes that are not said are asked for, as the server does', async () => {
    server.willAnswer(...answers(unit.current))
    expect(problemOf(await run(dry))).toMatchObject({ code: 'applied-required', exit: 65 })
  })

  test('a second pass follows the last record and counts it', async () => {
    server.willAnswer(...answers(unit.current))
    const ran = await run([
      ...dry,
      '--applied',
      'gain=2593,offset=2048',
      '--follows',
      'last',
      '--effects',
      'learned',
    ])
    expect(JSON.parse(ran.stdout)).toMatchObject({ pass: 2, follows: recordIds[0] })
    expect(server.seen.map(({ path }) => path)).toContain(`/api/v1/trims/${recordIds[0]}`)
  })

  test('a document that does not match its hash is not used', async () => {
    server.willAnswer(json(200, revision('1'.repeat(64))))
    expect(problemOf(await run(dry))).toMatchObject({ code: 'defect', exit: 70 })
  })
})

describe('reading', () => {
  test('whoami: station, scopes, days to expiry, clock', async () => {
    server.willAnswer(json(200, me))
    const document = JSON.parse((await run(['whoami'])).stdout) as Record<string, number>
    expect(document).toMatchObject({
      format: 'ogee.whoami/1',
      url: server.url,
      who: me.who,
      server: me.server,
    })
    const days = (Date.parse('2027-01-01T00:00:00Z') - Date.now()) / 86_400_000
    expect(Math.abs((document.daysToExpiry ?? 0) - days)).toBeLessThanOrEqual(1)
    const off = (Date.now() - Date.parse(me.server.serverTime)) / 1000
    expect(Math.abs((document.clockDifferenceSeconds ?? 0) - off)).toBeLessThan(60)
    const table = (await run(['whoami', '--format', 'table'])).stdout
    expect(table).toMatch(/^Station +Station A$/m)
    expect(table).toMatch(/^Scopes +trims:write, trims:read$/m)
  })

  test('unit: codes and the record they come from; 12 without accepted codes', async () => {
    server.willAnswer(json(200, { items: [unit] }))
    const good = await run(['unit', '031'])
    expect(good.code).toBe(0)
    expect(JSON.parse(good.stdout)).toEqual({ format: 'ogee.unit/1', ...unit })
    expect(server.seen[0]?.path).toBe('/api/v1/units?serial=031')
    expect((await run(['unit', '031', '--format', 'csv'])).stdout).toContain(
      '031,1,u10,2593,0xA21,2048,0x800,1,1004317,',
    )

    const elsewhere = await run(['unit', '031', '--channel', '2'])
    expect([elsewhere.code, JSON.parse(elsewhere.stdout)]).toMatchObject([12, { current: [] }])
    const none = unit.current.map((at) => ({ ...at, codes: null, words: null, record: null, number: null }))
    server.willAnswer(json(200, { items: [{ ...unit, current: none }] }))
    expect((await run(['unit', '031'])).code).toBe(12)
  })

  test('unit: unknown, and in two designs', async () => {
    server.willAnswer(json(200, { items: [] }))
    expect(problemOf(await run(['unit', 'x']))).toMatchObject({ code: 'not-found', exit: 65 })
    server.willAnswer(json(200, { items: [unit, { ...unit, design: 'DBS-C' }] }))
    const ran = await run(['unit', '031'])
    expect(ran.code).toBe(65)
    expect(ran.stderr).toContain('DBS-A, DBS-C')
  })

  test('history follows pages as far as the limit, in each format', async () => {
    const page = (from: number, next: string | null) =>
      json(200, { items: [line(from), line(from - 1)], next })
    server.willAnswer(page(9, 'm1'), page(7, 'm2'))
    const all = await run(['history', '--unit', '031', '--verdict', 'ok', '--limit', '4'])
    expect(JSON.parse(all.stdout)).toMatchObject({
      next: 'm2',
      items: [{ number: 9 }, { number: 8 }, { number: 7 }, { number: 6 }],
    })
    expect(server.seen.map(({ path }) => path)).toEqual([
      '/api/v1/trims?unit=031&verdict=ok&limit=4',
      '/api/v1/trims?unit=031&verdict=ok&limit=2&after=m1',
    ])
    server.willAnswer(page(9, 'm1'), page(7, null))
    const csv = (await run(['history', '--format', 'csv'])).stdout.trimEnd().split('\n')
    expect(csv.map((row) => row.split(',')[0])).toEqual(['number', '9', '8', '7', '6'])
    server.willAnswer(page(9, 'm1'), page(7, null))
    const lines = (await run(['history', '--format', 'ndjson'])).stdout.trimEnd().split('\n')
    expect(lines.map((row) => (JSON.parse(row) as { number: number }).number)).toEqual([9, 8, 7, 6])
    server.willAnswer(json(200, { items: [], next: null }))
    expect((await run(['history', '--format', 'table'])).stdout).toBe('No record matches.\n')
  })

  test('design pull gives the exact bytes; 73 where they cannot be put', async () => {
    server.willAnswer(json(200, revision(hash)))
    expect((await run(['design', 'pull', 'DBS-A'])).stdout).toBe(designBytes.toString('utf8'))
    expect(server.seen[0]?.path).toBe('/api/v1/designs/DBS-A/revisions/released')
    await run(['design', 'pull', 'DBS-A', '--revision', '1', '--output', 'pulled.json'])
    expect(readFileSync(join(cli.folder, 'pulled.json')).equals(designBytes)).toBe(true)
    const nowhere = await run(['design', 'pull', 'DBS-A', '--output', 'no/such/folder.json'])
    expect(problemOf(nowhere)).toMatchObject({ code: 'cannot-create', exit: 73 })
  })
})

describe('L5: the token', () => {
  test('is no argument, and one that is typed there all the same is not repeated', async () => {
    for (const flags of [['--token', token], [`--token=${token}`], [token]]) {
      const ran = await run(['whoami', ...flags])
      expect(ran.code).toBe(64)
    }
  })

  test('stands in no message, not even of a defect that is debugged', async () => {
    server.willAnswer((_, response) => response.writeHead(500).end(token))
    const ran = await run(['whoami'], { env: { OGEE_LOG: 'debug' } })
    expect(ran.code).toBe(70)
    server.willAnswer((_, response) =>
      response.writeHead(302, { location: `http://127.0.0.1:9/?t=${token}` }).end(),
    )
    expect((await run(['whoami'])).code).toBe(78)
  })

  test('config file of mode 0600 works, of any wider mode is 78', async () => {
    const folder = join(cli.folder, 'config/ogee')
    mkdirSync(folder, { recursive: true })
    const file = join(folder, 'config.json')
    writeFileSync(file, JSON.stringify({ url: server.url, token }))
    server.willAnswer(json(200, me))
    for (const [mode, exit] of [
      [0o600, 0],
      [0o644, 78],
      [0o660, 78],
    ] as const) {
      chmodSync(file, mode)
      expect(statSync(file).mode & 0o777).toBe(mode)
      const ran = await run(['whoami'], { env: { OGEE_URL: '', OGEE_TOKEN: '' } })
      expect(ran.code).toBe(exit)
    }
    chmodSync(file, 0o600)
  })
})

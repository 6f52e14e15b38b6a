import { type AddressInfo, connect, createServer, type Socket } from 'node:net'
import request from 'supertest'
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { openDatabase } from '../../server/db/connection.ts'
import { api, newKey } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import {
  addDesign,
  addStation,
  addToken,
  type Harness,
  listen,
  serverHarness,
} from '../support/server-harness.ts'

/** A switch between server and database: through, refusing, cutting, or swallowing everything. */
type Mode = 'through' | 'refuse' | 'swallow' | 'slow'
const slowMs = 400
let mode: Mode = 'through'
const sockets = new Set<Socket>()
const proxy = createServer((client) => {
  if (mode === 'refuse') return void client.destroy()
  const { hostname, port } = new URL(harness.test.url)
  const upstream = connect(Number(port), hostname)
  for (const socket of [client, upstream]) {
    sockets.add(socket)
    socket.on('error', () => undefined)
    socket.on('close', () => {
      client.destroy()
      upstream.destroy()
    })
  }
  client.on('data', (chunk) => {
    if (mode === 'slow') setTimeout(() => upstream.writable && upstream.write(chunk), slowMs)
    else if (mode !== 'swallow') upstream.write(chunk)
  })
  upstream.on('data', (chunk) => {
    if (mode !== 'swallow') client.write(chunk)
  })
})
const cutAll = () => {
  for (const socket of sockets) socket.destroy()
  sockets.clear()
}

let harness: Harness
let served: Awaited<ReturnType<typeof listen>>
let database: ReturnType<typeof openDatabase>
let station: { token: string }

beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  station = await addToken(
    harness,
    ['trims:write', 'trims:read'],
    (await addStation(harness, 'Station A')).id,
  )
  await new Promise<void>((resolve) => proxy.listen(0, '127.0.0.1', resolve))
  const through = new URL(harness.test.url)
  through.port = String((proxy.address() as AddressInfo).port)
  database = openDatabase(through.toString())
  served = await listen({ ...harness.deps, database })
})
afterAll(async () => {
  mode = 'through'
  await served.stop()
  await database.close()
  cutAll()
  await new Promise((resolve) => proxy.close(resolve))
  await harness.close()
})

// Sequelize tells of transactions that it could not end; here they all are meant.
beforeEach(() => {
  vi.spyOn(console, 'warn').mockImplementation(() => undefined)
})

const trim = (unit: string, key = newKey()) =>
  api(served.url, 'post', '/trims', { ...station, key }).send(trimBody({ unit }))

/** R8's seconds are printed by `npm run test:faults`; here they are only guarded. */
function tell(what: string, sinceMs: number): void {
  if (process.env.OGEE_TIMES !== '1') return
  process.stdout.write(`R8: ${what} after ${((performance.now() - sinceMs) / 1_000).toFixed(2)} s\n`)
}

async function heals(what: string, unit: () => string, key?: string): Promise<void> {
  const since = performance.now()
  await expect.poll(async () => (await trim(unit(), key)).status, { timeout: 50_000, interval: 50 }).toBe(201)
  tell(`recording again, ${what}`, since)
}

async function expectOutage(send: () => PromiseLike<request.Response>) {
  const start = performance.now()
  const reply = await send()
  // A guard against hanging, ten times the aim of three seconds.
  expect(performance.now() - start).toBeLessThan(30_000)
  tell(`503 while the database is ${mode === 'refuse' ? 'gone' : 'silent'}`, start)
  expect([reply.status, reply.body.code, reply.headers['retry-after']]).toEqual([
    503,
    'database-unavailable',
    '1',
  ])
}

describe('while the database is down', () => {
  it('every route answers 503 with Retry-After, and heals by itself', async () => {
    expect((await trim('X-1')).status).toBe(201)
    mode = 'refuse'
    cutAll()
    await new Promise((resolve) => setTimeout(resolve, 700))
    await expectOutage(() => trim('X-2'))
    await expectOutage(() => api(served.url, 'get', '/trims', station))
    await expectOutage(() => api(served.url, 'get', '/ledger/checkpoint'))
    await expectOutage(() =>
      api(served.url, 'post', '/session').send({ email: 'a@example.org', password: 'b' }),
    )
    expect((await request(served.url).get('/readyz')).status).toBe(503)
    expect((await request(served.url).get('/healthz')).status).toBe(200)
    mode = 'through'
    await heals('the database is there again', () => `X-3-${newKey()}`)
  })

  it('a database that swallows everything is an outage too, in bounded time', async () => {
    await trim('X-4')
    // Several connections lie ready, and none of them will answer.
    await Promise.all(Array.from({ length: 6 }, () => api(served.url, 'get', '/trims', station)))
    mode = 'swallow'
    await expectOutage(() => trim('X-5'))
    // By now the token is asked for again, and that is swallowed as well.
    await expectOutage(() => trim('X-5'))
    mode = 'through'
    cutAll()
    await heals('the database speaks again', () => `X-6-${newKey()}`)
  })
})

describe('a block during an outage', () => {
  /** Gives the status of each line. */
  const block = async (lines: readonly object[]) => {
    const reply = await fetch(`${served.url}/api/v1/batches`, {
      method: 'POST',
      headers: { authorization: `Bearer ${station.token}`, 'content-type': 'application/x-ndjson' },
      body: lines.map((line) => `${JSON.stringify(line)}\n`).join(''),
    })
    const answers = (await reply.text()).trimEnd().split('\n')
    return answers.slice(0, -1).map((line) => (JSON.parse(line) as { status: number }).status)
  }

  it('every line hears 503 after one wait, not one wait a step; the same block completes later', async () => {
    await trim('B-0')
    const lines = Array.from({ length: 300 }, (_, i) => ({ key: newKey(), ...trimBody({ unit: `B-${i}` }) }))
    mode = 'swallow'
    const start = performance.now()
    const statuses = await block(lines.slice(1))
    expect(performance.now() - start).toBeLessThan(30_000)
    expect(statuses).toEqual(Array.from({ length: 299 }, () => 503))
    mode = 'through'
    cutAll()
    await expect
      .poll(async () => (await block(lines.slice(1))).every((status) => status === 201), { timeout: 20_000 })
      .toBe(true)
    const [row] = await harness.database.sql.rows<{ n: number }>(
      "SELECT COUNT(*) AS n FROM records WHERE unit LIKE 'B-%'",
    )
    expect(Number(row!.n)).toBe(300)
  })
})

describe('a slow database', () => {
  it('answers in bounded time: recorded, or an outage after which the same key finds what was done', async () => {
    expect((await trim('Slow-0')).status).toBe(201)
    mode = 'slow'
    const key = newKey()
    const start = performance.now()
    const first = await trim('Slow-1', key)
    // A guard against hanging, ten times the aim of three seconds.
    expect(performance.now() - start).toBeLessThan(30_000)
    expect([201, 503]).toContain(first.status)
    mode = 'through'
    tell(`${first.status} of a slow database`, start)
    await heals('the database is quick again', () => 'Slow-1', key)
    expect(await harness.database.sql.rows("SELECT id FROM records WHERE unit = 'Slow-1'")).toHaveLength(1)
  })
})

describe('a connection that is cut under a recording', () => {
  it('doubles nothing: the same key again gives one record, whatever the first answer was', async () => {
    for (let round = 0; round < 12; round++) {
      const key = newKey()
      const unit = `Cut-${round}`
      const first = trim(unit, key).then((reply) => reply.status)
      await new Promise((resolve) => setTimeout(resolve, round * 2))
      cutAll()
      expect([201, 409, 503]).toContain(await first)
      await expect.poll(async () => (await trim(unit, key)).status, { timeout: 20_000 }).toBe(201)
      const rows = await harness.database.sql.rows('SELECT id FROM records WHERE unit = ?', [unit])
      expect(rows).toHaveLength(1)
    }
  })
})

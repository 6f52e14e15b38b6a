import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { makeClient } from '../../cli/client.ts'
import { getMe } from '../../shared/contract/session.ts'
import { postTrim } from '../../shared/contract/trims.ts'
import type { ErrorCode } from '../../shared/errors.ts'
import { examplePoints, me, recordOf } from './support/answers.ts'
import { cut, FakeServer, hangUp, json, problem, type Reply } from './support/fake-server.ts'
import { memoryIo } from './support/memory-io.ts'

const server = new FakeServer()
beforeAll(async () => {
  await server.start()
})
afterAll(async () => await server.stop())

const token = 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789'
const quick = { tries: 4, firstWaitMs: 1, waitInAllMs: 3_000, answerMs: 2_000 }
const client = () => makeClient({ url: server.url, token }, memoryIo(), quick)
const body = { design: 'DBS-A', unit: '031', points: examplePoints }
const trimmed: Reply = (seen, response) => json(201, recordOf(seen))(seen, response)
const troubleOf = async (promise: Promise<unknown>) =>
  await promise.then(
    () => {
      throw new Error('it went well')
    },
    (error: { code: ErrorCode; exit: number; message: string }) => error,
  )

beforeEach(() => server.willAnswer(json(200, me)))

describe('trouble that passes', () => {
  test.each<[string, Reply]>([
    ['503 of the database', problem('database-unavailable', { 'retry-after': '0' })],
    ['429', problem('too-many-requests', { 'retry-after': '0' })],
    ['409 in flight', problem('idempotency-in-flight')],
    ['a proxy that has no server behind it', (_, response) => response.writeHead(502).end('<html>')],
    ['an answer that is cut', cut],
    ['a connection that is closed without a word', hangUp],
  ])('%s: sent again with the same key and the same bytes', async (_, trouble) => {
    server.willAnswer(trouble, trouble, trimmed)
    const record = await client().call(postTrim, { body, idempotencyKey: 'K1' })
    expect(record.number).toBe(1_004_317)
    expect(server.seen.map(({ key }) => key)).toEqual(['K1', 'K1', 'K1'])
    expect(new Set(server.seen.map((seen) => JSON.stringify(seen.body))).size).toBe(1)
    expect(server.seen[0]?.authorization).toBe(`Bearer ${token}`)
  })

  test('Retry-After goes before the waiting of our own, in seconds or as a date', async () => {
    // Our own first wait would be over all patience, so only the header can make this succeed.
    const slow = { ...quick, firstWaitMs: 60_000 }
    const past = new Date(0).toUTCString()
    server.willAnswer(
      problem('not-ready', { 'retry-after': '0' }),
      problem('not-ready', { 'retry-after': past }),
      json(200, me),
    )
    await makeClient({ url: server.url, token }, memoryIo(), slow).call(getMe, {})
    expect(server.seen).toHaveLength(3)
  })

  test('Retry-After beyond all patience ends it at once', async () => {
    server.willAnswer(problem('too-many-requests', { 'retry-after': '3600' }))
    expect(await troubleOf(client().call(getMe, {}))).toMatchObject({ code: 'too-many-requests', exit: 75 })
    expect(server.seen).toHaveLength(1)
  })
})

describe('trouble that stays', () => {
  test.each<[string, Reply, ErrorCode, number]>([
    ['503', problem('database-unavailable', { 'retry-after': '0' }), 'database-unavailable', 75],
    ['503 not in our form', (_, response) => response.writeHead(503).end(), 'not-ready', 75],
    ['429 not in our form', (_, response) => response.writeHead(429).end(), 'too-many-requests', 75],
    ['cut each time', cut, 'answer-cut', 75],
  ])('%s: tried four times, then 75', async (_, trouble, code, exit) => {
    server.willAnswer(trouble)
    expect(await troubleOf(client().call(getMe, {}))).toMatchObject({ code, exit })
    expect(server.seen).toHaveLength(4)
  })

  test('never reached: 69', async () => {
    const nobody = makeClient({ url: 'http://127.0.0.1:9', token }, memoryIo(), quick)
    expect(await troubleOf(nobody.call(getMe, {}))).toMatchObject({ code: 'server-unreachable', exit: 69 })
  })

  test('reached once and then gone: 75', async () => {
    server.willAnswer(problem('not-ready'), hangUp)
    expect(await troubleOf(client().call(getMe, {}))).toMatchObject({ code: 'answer-cut', exit: 75 })
  })

  test('a server that takes and never answers is left after the time allowed', async () => {
    server.willAnswer(() => undefined)
    const hasty = makeClient({ url: server.url, token }, memoryIo(), { ...quick, tries: 2, answerMs: 100 })
    expect(await troubleOf(hasty.call(getMe, {}))).toMatchObject({ code: 'server-unreachable', exit: 69 })
  })

  test.each<[ErrorCode, number]>([
    ['token-invalid', 77],
    ['insufficient-scope', 77],
    ['override-needs-a-person', 77],
    ['not-found', 65],
    ['idempotency-key-reused', 65],
    ['applied-required', 65],
    ['precondition-failed', 65],
    ['defect', 70],
  ])('%s is not tried again and ends with %i', async (code, exit) => {
    server.willAnswer(problem(code))
    expect(await troubleOf(client().call(getMe, {}))).toMatchObject({ code, exit })
    expect(server.seen).toHaveLength(1)
  })

  test('an answer that is not as agreed is a defect', async () => {
    server.willAnswer(json(200, { who: 'me' }))
    expect(await troubleOf(client().call(getMe, {}))).toMatchObject({ code: 'defect', exit: 70 })
  })
})

test('a redirect is not followed: the token stays here', async () => {
  const other = await new FakeServer().start()
  other.willAnswer(json(200, me))
  server.willAnswer((_, response) => response.writeHead(307, { location: `${other.url}/api/v1/me` }).end())
  const trouble = await troubleOf(client().call(getMe, {}))
  expect(trouble).toMatchObject({ code: 'configuration', exit: 78 })
  expect(trouble.message).toContain(other.url)
  expect(other.seen).toHaveLength(0)
  expect(server.seen).toHaveLength(1)
  await other.stop()
})

test('an answer may have keys that this version does not know', async () => {
  server.willAnswer(json(200, { ...me, more: 1 }))
  expect(await client().call(getMe, {})).toMatchObject({ who: me.who, more: 1 })
})

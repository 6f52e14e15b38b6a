import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { runSeed, seededRandom } from '../support/random.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import {
  addDesign,
  addPerson,
  addStation,
  addToken,
  type Harness,
  listen,
  serverHarness,
} from '../support/server-harness.ts'

let harness: Harness
let second: Awaited<ReturnType<typeof listen>>
let station: { token: string }
let rotated: { token: string }
let other: { token: string }

beforeAll(async () => {
  harness = await serverHarness()
  // Two servers on one database, each with its own key set in memory and its own coalescer.
  second = await listen(harness.deps)
  await addDesign(harness, 'U18')
  const a = await addStation(harness, 'Station A')
  station = await addToken(harness, ['trims:write', 'trims:read'], a.id)
  rotated = await addToken(harness, ['trims:write'], a.id)
  other = await addToken(harness, ['trims:write'], (await addStation(harness, 'Station B')).id)
})
afterAll(async () => {
  await second.stop()
  await harness.close()
})

const canonicalPart = ({ ledger: _, notices: __, ...rest }: Record<string, unknown>) => rest

describe('an idempotency key', () => {
  it('gives the first answer again: same record, same receipt, and the notice', async () => {
    const key = newKey()
    const first = await post(harness.url, { ...station, key }, trimBody({ unit: 'I-1' }))
    const again = await post(second.url, { ...station, key }, trimBody({ unit: 'I-1' }))
    expect(canonicalPart(again)).toEqual(canonicalPart(first))
    expect(again.notices).toMatchObject([{ code: 'replayed' }])
    // By the station's other token too, for tokens are exchanged while a station works.
    const byOther = await post(harness.url, { ...rotated, key }, trimBody({ unit: 'I-1' }))
    expect(byOther.id).toBe(first.id)
  })

  it('does not look at `claimed`, which the station’s clock gets into', async () => {
    const key = newKey()
    const claimed = (at: string) => ({ solver: '1.0.0', codes: null, at })
    const first = await post(
      harness.url,
      { ...station, key },
      trimBody({ unit: 'I-2', claimed: claimed('2026-01-01T00:00:00Z') }),
    )
    const again = await post(
      harness.url,
      { ...station, key },
      trimBody({ unit: 'I-2', claimed: claimed('2026-01-02T00:00:00Z') }),
    )
    expect(again.id).toBe(first.id)
  })

  it('with another body is refused, and changes nothing', async () => {
    const key = newKey()
    await post(harness.url, { ...station, key }, trimBody({ unit: 'I-3' }))
    const refused = await post(
      harness.url,
      { ...station, key },
      trimBody({ unit: 'I-3', points: pointsOf() }),
      422,
    )
    expect(refused.code).toBe('idempotency-key-reused')
  })

  it('is a station’s own: another station may use the same', async () => {
    const key = newKey()
    const first = await post(harness.url, { ...station, key }, trimBody({ unit: 'I-4' }))
    const theirs = await post(harness.url, { ...other, key }, trimBody({ unit: 'I-4b' }))
    expect(theirs.id).not.toBe(first.id)
  })

  it('missing is 400, unusable 422', async () => {
    const missing = await api(harness.url, 'post', '/trims', station).send(trimBody())
    expect([missing.status, missing.body.code]).toEqual([400, 'idempotency-key-missing'])
    for (const key of ['a b', 'x'.repeat(129)]) {
      const bad = await api(harness.url, 'post', '/trims', { ...station, key }).send(trimBody())
      expect([bad.status, bad.body.code]).toEqual([422, 'invalid-request'])
    }
  })

  it('of a refusal is free again', async () => {
    const key = newKey()
    await post(harness.url, { ...station, key }, trimBody({ unit: 'I-5', lot: 'NONE' }), 422)
    await post(harness.url, { ...station, key }, trimBody({ unit: 'I-5' }))
  })

  it('still in flight on another server is 409 with Retry-After', async () => {
    const key = newKey()
    const { sequelize } = harness.database
    const holding = await sequelize.transaction()
    const [row] = await harness.database.sql.rows<{ id: string }>(
      "SELECT id FROM stations WHERE name = 'Station A'",
    )
    await sequelize.query(
      "INSERT INTO idempotency_keys (scope, idem_key, body_hash, record_id) VALUES ($1, $2, REPEAT('x', 32), $1)",
      { bind: [row!.id, key], transaction: holding },
    )
    const reply = await api(harness.url, 'post', '/trims', { ...station, key }).send(
      trimBody({ unit: 'I-6' }),
    )
    expect([reply.status, reply.body.code, reply.headers['retry-after']]).toEqual([
      409,
      'idempotency-in-flight',
      '1',
    ])
    await holding.rollback()
    await post(harness.url, { ...station, key }, trimBody({ unit: 'I-6' }))
  })
})

describe('ASVS V2.3.3 and R2: one effect per key', () => {
  const seed = runSeed()

  it(`holds over 500 deliveries, doubled and shuffled, to two servers at once (seed ${seed})`, async () => {
    const random = seededRandom(seed)
    const keys = Array.from({ length: 180 }, (_, i) => ({ key: newKey(), unit: `D-${i % 60}`, n: i }))
    const deliveries = Array.from({ length: 500 }, () => random.pick(keys)).concat(keys)
    const ids = new Map<string, string>()
    const queue = [...deliveries]
    const worker = async () => {
      for (let one = queue.pop(); one; one = queue.pop()) {
        const body = trimBody({ unit: one.unit, applied: 'neutral', conditions: { note: `n${one.n}` } })
        const url = random.next() < 0.5 ? harness.url : second.url
        const reply = await api(url, 'post', '/trims', { ...station, key: one.key }).send(body)
        if (reply.status === 409) {
          expect(reply.headers['retry-after']).toBe('1')
          queue.unshift(one)
          continue
        }
        expect(reply.status, JSON.stringify(reply.body)).toBe(201)
        const known = ids.get(one.key)
        if (known !== undefined) expect(reply.body.id).toBe(known)
        ids.set(one.key, reply.body.id)
      }
    }
    await Promise.all(Array.from({ length: 12 }, worker))
    const [count] = await harness.database.sql.rows<{ n: number; keys: number; leaves: number }>(
      `SELECT (SELECT COUNT(*) FROM records WHERE unit LIKE 'D-%') AS n,
        (SELECT COUNT(*) FROM idempotency_keys k JOIN records r ON r.id = k.record_id WHERE r.unit LIKE 'D-%') AS \`keys\`,
        (SELECT COUNT(*) FROM records r JOIN ledger_leaves l ON l.id = r.leaf_id WHERE r.unit LIKE 'D-%') AS leaves`,
    )
    expect(count).toEqual({ n: 180, keys: 180, leaves: 180 })
    expect(new Set(ids.values()).size).toBe(180)
  })

  it('ASVS V2.3.4 R7: of two who trim one fresh unit at once, the later must say what was applied', async () => {
    for (let round = 0; round < 15; round++) {
      const unit = `Race-${round}`
      const replies = await Promise.all(
        [harness.url, second.url].map((url) =>
          api(url, 'post', '/trims', { ...station, key: newKey() }).send(trimBody({ unit })),
        ),
      )
      expect(replies.map((reply) => reply.status).sort()).toEqual([201, 422])
      expect(replies.find((reply) => reply.status === 422)!.body.code).toBe('applied-required')
    }
  })
})

it('records of one person are replayed to that person', async () => {
  await addPerson(harness, 'operator')
  const cookie = await signIn(harness.url, 'operator@example.org')
  const key = newKey()
  const first = await post(harness.url, { cookie, key }, trimBody({ unit: 'P-1' }))
  const again = await post(second.url, { cookie, key }, trimBody({ unit: 'P-1' }))
  expect(again.id).toBe(first.id)
})

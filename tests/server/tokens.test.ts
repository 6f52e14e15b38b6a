import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { newTokenParts, parseTokenText, tokenText } from '../../server/policies/token-text.ts'
import { tokenPattern } from '../../shared/contract/tokens.ts'
import { api, post, signIn } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
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
let admin: { cookie: string }

beforeAll(async () => {
  harness = await serverHarness()
  second = await listen(harness.deps)
  await addDesign(harness, 'U18')
  await addPerson(harness, 'administrator')
  admin = { cookie: await signIn(harness.url, 'administrator@example.org') }
})
afterAll(async () => {
  await second.stop()
  await harness.close()
})

describe('a token’s text', () => {
  it('ASVS V11.5.1 has 178 random bits and a checksum that a scanner can check', () => {
    const texts = Array.from({ length: 2_000 }, () => tokenText(newTokenParts()))
    expect(new Set(texts).size).toBe(2_000)
    for (const text of texts) {
      expect(text).toMatch(tokenPattern)
      expect(parseTokenText(text)).not.toBeNull()
    }
    const [text] = texts
    for (let i = 5; i < text!.length; i++) {
      if (text![i] === '_') continue
      const slip = text!.slice(0, i) + (text![i] === 'a' ? 'b' : 'a') + text!.slice(i + 1)
      expect(parseTokenText(slip), `a slip at ${i}`).toBeNull()
    }
  })

  it('is in the answer that makes it and nowhere else, ever', async () => {
    const station = await addStation(harness, 'Once')
    const made = await api(harness.url, 'post', '/tokens', admin).send({
      name: 'Line 1',
      station: station.id,
      scopes: ['trims:write'],
    })
    expect(made.status).toBe(201)
    const { token, ...line } = made.body
    expect(token).toMatch(tokenPattern)
    expect(line).toMatchObject({
      station: 'Once',
      createdBy: 'Test administrator',
      revokedAt: null,
      lastUsedAt: null,
    })
    const days = (Date.parse(line.expiresAt) - Date.parse(line.createdAt)) / 86_400_000
    expect(days).toBe(90)
    const list = await api(harness.url, 'get', '/tokens', admin)
    const secret = token.split('_')[2]
    expect(JSON.stringify(list.body)).not.toContain(secret)
    expect(JSON.stringify(harness.log)).not.toContain(secret)
    const rows = await harness.database.sql.rows<Record<string, unknown>>('SELECT * FROM tokens')
    const leaves = await harness.database.sql.rows<Record<string, unknown>>(
      "SELECT CONVERT(body USING utf8mb4) AS body FROM ledger_leaves WHERE kind = 'token'",
    )
    expect(JSON.stringify([rows, leaves])).not.toContain(secret.slice(0, 30))
    expect(leaves.some((leaf) => String(leaf.body).includes(line.id))).toBe(true)
  })
})

describe('tokens of a station', () => {
  it('are two at most, also when made at once; a revoked or expired one makes room', async () => {
    const station = await addStation(harness, 'Rotation')
    const make = (days = 1) =>
      api(harness.url, 'post', '/tokens', admin).send({
        name: 'T',
        station: station.id,
        scopes: ['trims:read'],
        days,
      })
    const replies = await Promise.all(Array.from({ length: 5 }, () => make()))
    expect(replies.map((reply) => reply.status).sort()).toEqual([201, 201, 409, 409, 409])
    expect(replies.find((reply) => reply.status === 409)!.body.code).toBe('token-limit')
    const [first] = replies.filter((reply) => reply.status === 201)
    expect((await api(harness.url, 'delete', `/tokens/${first!.body.id}`, admin)).status).toBe(204)
    expect((await make()).status).toBe(201)
  })

  it('end with the station, which then gets none', async () => {
    const station = await addStation(harness, 'Ends')
    const token = await addToken(harness, ['trims:read'], station.id)
    expect((await api(harness.url, 'get', '/me', token)).status).toBe(200)
    const patch = (body: object) => api(harness.url, 'patch', `/stations/${station.id}`, admin).send(body)
    expect((await patch({ retired: true })).body.retiredAt).not.toBeNull()
    expect((await api(harness.url, 'get', '/me', token)).body.code).toBe('token-invalid')
    expect((await patch({ name: 'Again' })).body.code).toBe('station-retired')
    const more = await api(harness.url, 'post', '/tokens', admin).send({
      name: 'T',
      station: station.id,
      scopes: ['trims:read'],
    })
    expect(more.body.code).toBe('station-retired')
  })

  it('need a station to record, and designs that exist', async () => {
    const without = await api(harness.url, 'post', '/tokens', admin).send({
      name: 'T',
      scopes: ['trims:write'],
    })
    expect([without.status, without.body.errors[0].path]).toEqual([422, '/station'])
    const unknown = await api(harness.url, 'post', '/tokens', admin).send({
      name: 'T',
      scopes: ['designs:read'],
      designs: ['NONE'],
    })
    expect([unknown.status, unknown.body.code]).toEqual([404, 'not-found'])
  })
})

describe('revocation (S6)', () => {
  it('holds at once here and within a second on every server', async () => {
    const token = await addToken(harness, ['trims:read'], (await addStation(harness, 'Revoked')).id)
    const status = async (url: string) => (await api(url, 'get', '/me', token)).status
    expect([await status(harness.url), await status(second.url)]).toEqual([200, 200])
    await api(harness.url, 'delete', `/tokens/${token.id}`, admin)
    expect(await status(harness.url)).toBe(401)
    await expect.poll(() => status(second.url), { timeout: 10_000, interval: 50 }).toBe(401)
    // Again changes nothing and leaves no second leaf.
    expect((await api(harness.url, 'delete', `/tokens/${token.id}`, admin)).status).toBe(204)
    const leaves = await harness.database.sql.rows<{ body: Buffer }>(
      "SELECT body FROM ledger_leaves WHERE kind = 'token'",
    )
    expect(
      leaves.filter((leaf) => leaf.body.includes('revokedBy') && leaf.body.includes(token.id)),
    ).toHaveLength(1)
  })

  it('expiry counts by the server’s clock', async () => {
    const token = await addToken(harness, ['trims:read'], (await addStation(harness, 'Expires')).id, {
      days: 1,
    })
    expect((await api(harness.url, 'get', '/me', token)).status).toBe(200)
    harness.clock.shiftMs = 86_400_000 + 1_000
    expect((await api(harness.url, 'get', '/me', token)).body.code).toBe('token-invalid')
    harness.clock.shiftMs = 0
  })
})

it('notes when a token was last used, not more than once a minute', async () => {
  const token = await addToken(harness, ['trims:read'], (await addStation(harness, 'Used')).id)
  const last = async () =>
    (await harness.database.models.tokens.findByPk(token.id))!.get().lastUsedAt?.getTime() ?? null
  expect(await last()).toBeNull()
  await api(harness.url, 'get', '/me', token)
  const first = await last()
  expect(first).not.toBeNull()
  await new Promise((resolve) => setTimeout(resolve, 600))
  await api(harness.url, 'get', '/me', token)
  expect(await last()).toBe(first)
})

it('ASVS V2.4.1 a token over its quota gets 429 with Retry-After, and other tokens go on', async () => {
  const small = await serverHarness({ quotas: { requestsPerTokenMinute: 5 } })
  await addDesign(small, 'U18')
  const one = await addToken(small, ['trims:write'], (await addStation(small, 'One')).id)
  const two = await addToken(small, ['trims:write'], (await addStation(small, 'Two')).id)
  for (let i = 0; i < 5; i++) expect((await api(small.url, 'get', '/me', one)).status).toBe(200)
  const over = await api(small.url, 'get', '/me', one)
  expect([over.status, over.body.code]).toEqual([429, 'too-many-requests'])
  expect(Number(over.headers['retry-after'])).toBeGreaterThan(0)
  await post(small.url, two, trimBody())
  await small.close()
})

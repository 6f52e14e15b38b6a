import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { pathOf } from '../../shared/call.ts'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import type { Endpoint } from '../../shared/contract/endpoint.ts'
import { type Role, role as roles, type Scope, scope as scopes } from '../../shared/contract/primitives.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { trimBody, unipolar } from '../support/server-factories.ts'
import {
  addDesign,
  addPerson,
  addStation,
  addToken,
  type Harness,
  serverHarness,
} from '../support/server-harness.ts'

/** S2: every route × nobody, four roles, each scope × two stations, expired, revoked; from the list of endpoints. */

type Caller = {
  name: string
  send: { cookie?: string; token?: string }
  expect: (endpoint: Endpoint) => number[]
}

let harness: Harness
let recordOfA = ''
const callers = new Map<string, Caller>()

const unknownId = '01a230b2-a46d-7315-89af-a51980fdfb2a'
const allowed = [200, 201, 204, 404, 409, 422]

beforeAll(async () => {
  harness = await serverHarness({
    quotas: { failedSignInsPerAccountAndAddress: 1e6, failedSignInsPerAddress: 1e6 },
  })
  await addDesign(harness, 'U18')
  for (const role of roles.options) {
    await addPerson(harness, role)
    callers.set(role, {
      name: role,
      send: { cookie: await signIn(harness.url, `${role}@example.org`) },
      expect: (endpoint) => (permits(endpoint, 'roles', role) ? allowed : [403]),
    })
  }
  for (const letter of ['A', 'B']) {
    for (const scope of scopes.options) {
      // A station has at most two live tokens, so each gets a station of its own.
      const station = await addStation(harness, `${letter} ${scope}`)
      const { token } = await addToken(harness, [scope], station.id)
      callers.set(`${scope} of ${letter}`, {
        name: `${scope} of ${letter}`,
        send: { token },
        expect: (endpoint) => (permits(endpoint, 'scopes', scope) ? allowed : [403]),
      })
    }
  }
  await addBadTokens()
  callers.set('nobody', {
    name: 'nobody',
    send: {},
    expect: (endpoint) => (endpoint.access === 'open' ? openReplies : [401]),
  })
  const record = await post(harness.url, callers.get('trims:write of A')!.send, trimBody({ unit: 'M-1' }))
  recordOfA = record.id
})
afterAll(() => harness.close())

const openReplies = [200, 201, 204, 401, 403, 422]

async function addBadTokens() {
  const station = await addStation(harness, 'Bad')
  const all = [...scopes.options]
  const revoked = await addToken(harness, all, station.id)
  const admin = callers.get('administrator')!.send
  expect((await api(harness.url, 'delete', `/tokens/${revoked.id}`, admin)).status).toBe(204)
  harness.clock.shiftMs = -3 * 86_400_000
  const expired = await addToken(harness, all, station.id, { days: 1 })
  harness.clock.shiftMs = 0
  const retired = await addStation(harness, 'Retired')
  const orphan = await addToken(harness, all, retired.id)
  expect(
    (await api(harness.url, 'patch', `/stations/${retired.id}`, admin).send({ retired: true })).status,
  ).toBe(200)
  for (const [name, token] of [
    ['expired', expired.token],
    ['revoked', revoked.token],
    ['of a retired station', orphan.token],
    ['of nobody', 'ogee_AAAAAAAA_AAAAAAAAAAAAAAAAAAAAAAAAAAAAAAAAAAAA'],
  ] as const) {
    callers.set(name, {
      name,
      send: { token },
      expect: (endpoint) => (endpoint.access === 'open' && endpoint.method === 'GET' ? [200] : [401]),
    })
  }
}

function permits(endpoint: Endpoint, list: 'roles' | 'scopes', value: Role | Scope): boolean {
  // Sign-in and set-up are for people.
  if (endpoint.access === 'open') return list === 'roles' || endpoint.method === 'GET'
  return (endpoint.access[list] as readonly string[]).includes(value)
}

/** A request that is well-formed for the endpoint and harmless when let through. */
function requestTo(endpoint: Endpoint, send: Caller['send']) {
  const id =
    endpoint.id === 'readRecord' ? recordOfA : endpoint.path.startsWith('/tokens') ? 'AAAAAAAA' : unknownId
  const params = { id, recordId: recordOfA, key: 'U18', number: 'released', lot: 'L-1' }
  const queries: Record<string, object> = {
    findUnits: { serial: 'M-1' },
    compareRevisions: { to: 'released' },
    proveConsistency: { from: '1' },
  }
  const query = (queries[endpoint.id] ?? {}) as Record<string, string>
  const verb = endpoint.method.toLowerCase() as 'get' | 'post' | 'put' | 'patch' | 'delete'
  const sent = api(harness.url, verb, pathOf(endpoint, { params, query }), {
    ...send,
    ...(endpoint.idempotent ? { key: newKey() } : {}),
    ...(endpoint.conditional ? { headers: { 'If-Match': '"0.0"' } } : {}),
  })
  // An empty object is refused by every schema of ours, but only after access.
  if (endpoint.ndjson) return sent.set('Content-Type', 'application/x-ndjson').send('{}\n')
  return endpoint.body ? sent.send({}) : sent
}

describe('ASVS V8.2.1 function-level access: every route by every kind of caller (S2)', () => {
  it('covers a policy for each endpoint', () => {
    expect(allEndpoints.length).toBeGreaterThan(15)
    for (const endpoint of allEndpoints) expect(endpoint.access, endpoint.id).toBeDefined()
    expect(new Set(allEndpoints.map((endpoint) => endpoint.id)).size).toBe(allEndpoints.length)
  })

  // Signing out would end the sessions that the other rows use; by token it is refused as sign-in is.
  it.each(allEndpoints.filter((endpoint) => endpoint.id !== 'signOut'))('$method $path', async (endpoint) => {
    for (const caller of callers.values()) {
      const reply = await requestTo(endpoint, caller.send)
      const expected =
        endpoint.access === 'open' && caller.send.token === undefined ? openReplies : caller.expect(endpoint)
      expect(
        expected,
        `${caller.name} at ${endpoint.id} got ${reply.status} ${JSON.stringify(reply.body)}`,
      ).toContain(reply.status)
      if (reply.status >= 400)
        expect(reply.headers['content-type']).toBe('application/problem+json; charset=utf-8')
    }
  })
})

describe('ASVS V8.2.2 object-level access: two stations, ids swapped', () => {
  it('gives a record to its own station only, and to whoever may read all', async () => {
    const station = (await harness.database.models.records.findByPk(recordOfA))!.get().stationId!
    const own = await addToken(harness, ['trims:read'], station)
    const status = async (send: Caller['send']) =>
      (await api(harness.url, 'get', `/trims/${recordOfA}`, send)).status
    expect(await status(own)).toBe(200)
    expect(await status(callers.get('trims:read of B')!.send)).toBe(404)
    expect(await status(callers.get('trims:read-all of B')!.send)).toBe(200)
    expect(await status(callers.get('auditor')!.send)).toBe(200)
  })

  it('keeps a token for some designs away from the others, in every route', async () => {
    await addDesign(harness, 'OTHER')
    const station = await addStation(harness, 'Narrow')
    const everything = ['designs:read', 'designs:write', 'trims:write', 'trims:read-all'] as const
    const narrow = await addToken(harness, [...everything], station.id, { designs: ['OTHER'] })
    const get = (path: string) => api(harness.url, 'get', path, narrow)
    expect((await get('/designs')).body.items.map((design: { key: string }) => design.key)).toEqual(['OTHER'])
    expect((await get('/designs/U18')).status).toBe(404)
    for (const path of ['revisions/1', 'revisions/1/difference?to=1', 'use']) {
      expect((await get(`/designs/U18/${path}`)).status, path).toBe(404)
    }
    const headers = { 'If-Match': '*' }
    const document = unipolar()
    const to = (verb: 'post' | 'put', path: string) =>
      api(harness.url, verb, `/designs/U18/${path}`, { ...narrow, headers })
    expect((await to('post', 'revisions').send({ document })).status).toBe(404)
    expect((await to('put', 'revisions/1').send({ document })).status).toBe(404)
    expect((await to('post', 'revisions/1/review')).status).toBe(404)
    const copy = { key: 'OTHER', document, copiedFrom: { design: 'U18', revision: 1 } }
    expect((await api(harness.url, 'post', '/designs', narrow).send(copy)).status).toBe(404)
    expect((await get(`/trims/${recordOfA}`)).status).toBe(404)
    expect((await get(`/ledger/proof/${recordOfA}`)).status).toBe(404)
    expect((await get('/trims')).body.items).toEqual([])
    expect((await get('/units?serial=M-1')).body.items).toEqual([])
    await post(harness.url, narrow, trimBody({ unit: 'M-2' }), 404)
    await post(harness.url, narrow, trimBody({ unit: 'M-2', design: 'OTHER' }))
  })
})

describe('ASVS V16.3.2 failed authorisation is logged', () => {
  it('with one line each, which says who and why', async () => {
    const before = harness.log.length
    await requestTo(
      allEndpoints.find((endpoint) => endpoint.id === 'createToken')!,
      callers.get('operator')!.send,
    )
    await requestTo(allEndpoints.find((endpoint) => endpoint.id === 'whoAmI')!, callers.get('revoked')!.send)
    await requestTo(allEndpoints.find((endpoint) => endpoint.id === 'listTokens')!, {})
    const lines = harness.log.slice(before).filter((line) => line.level === 'warn')
    expect(lines.map((line) => line.problem)).toEqual(['forbidden', 'token-invalid', 'sign-in-required'])
    expect(lines[0]).toMatchObject({ by: expect.stringMatching(/^person:/), status: 403 })
  })
})

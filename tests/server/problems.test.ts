import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import { problem } from '../../shared/contract/problem.ts'
import { errorTable } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { trimBody, unipolar } from '../support/server-factories.ts'
import { addPerson, type Harness } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }
let admin: { cookie: string }
let engineer: { cookie: string }

beforeAll(async () => {
  ;({ harness, url, station, admin, engineer } = await serverScene())
})
afterAll(() => harness.close())

describe('problems (S4)', () => {
  it('have a page each, which the type leads to', async () => {
    for (const code of Object.keys(errorTable)) {
      const reply = await request(url).get(`/problems/${code}`)
      expect(reply.status, code).toBe(200)
      expect(reply.text).toContain(`Code: ${code}`)
    }
    expect((await request(url).get('/problems/constructor')).status).toBe(404)
  })

  it.each([
    ['sign-in-required', 401, 'Bearer realm="ogee"', () => api(url, 'get', '/me')],
    [
      'token-invalid',
      401,
      'Bearer realm="ogee", error="invalid_token"',
      () => api(url, 'get', '/me', { token: 'abc' }),
    ],
    [
      'token-malformed',
      400,
      'Bearer realm="ogee", error="invalid_request"',
      () => api(url, 'get', '/me', { headers: { Authorization: 'Basic abc' } }),
    ],
    [
      'token-malformed',
      400,
      'Bearer realm="ogee", error="invalid_request"',
      () => api(url, 'get', '/me', { headers: { Authorization: 'Bearer a b' } }),
    ],
    [
      'token-malformed',
      400,
      'Bearer realm="ogee", error="invalid_request"',
      () => api(url, 'get', '/me', { headers: { Authorization: 'Bearer' } }),
    ],
    [
      'token-malformed',
      400,
      'Bearer realm="ogee", error="invalid_request"',
      () => api(url, 'get', '/me', { ...station, ...admin }),
    ],
    [
      'token-malformed',
      400,
      'Bearer realm="ogee", error="invalid_request"',
      () => api(url, 'get', '/me?access_token=abc'),
    ],
    [
      'insufficient-scope',
      403,
      'Bearer realm="ogee", error="insufficient_scope", scope="designs:write"',
      () => api(url, 'post', '/designs', station).send({}),
    ],
    [
      'insufficient-scope',
      403,
      'Bearer realm="ogee", error="insufficient_scope"',
      () => api(url, 'get', '/stations', station),
    ],
    ['forbidden', 403, undefined, () => api(url, 'post', '/stations', engineer).send({ name: 'x' })],
    [
      'wrong-password',
      401,
      'Bearer realm="ogee"',
      () => api(url, 'post', '/session').send({ email: 'x@example.org', password: 'y' }),
    ],
  ] as const)('%s is %i with its challenge', async (code, status, challenge, send) => {
    const reply = await send()
    expect([reply.status, reply.body.code]).toEqual([status, code])
    expect(reply.headers['www-authenticate']).toBe(challenge)
    expect(reply.headers['content-type']).toBe('application/problem+json; charset=utf-8')
    const document = problem.parse(reply.body)
    expect(document).toMatchObject({ type: `/problems/${code}`, title: errorTable[code].title, status })
    expect(document.instance).toBe(`urn:uuid:${reply.headers['x-request-id']}`)
  })

  it('405 names what is served', async () => {
    const reply = await request(url).put('/api/v1/trims')
    expect([reply.status, reply.body.code, reply.headers.allow]).toEqual([
      405,
      'method-not-allowed',
      'POST, GET, HEAD',
    ])
    expect((await request(url).options('/api/v1/me')).status).toBe(405)
  })

  it.each([
    ['malformed-json', 400, 'application/json', '{"design":'],
    ['malformed-json', 400, 'application/json', Buffer.from([0x22, 0xff, 0x22])],
    ['malformed-json', 400, 'application/json', `{"x":${'['.repeat(50)}${']'.repeat(50)}}`],
    ['malformed-json', 400, 'application/json', ''],
    ['unsupported-media-type', 415, 'text/plain', '{}'],
    ['unsupported-media-type', 415, 'application/json; charset=utf-16', '{}'],
    ['body-too-large', 413, 'application/json', `"${'x'.repeat(limits.bodyMaxBytes - 1)}"`],
    ['invalid-request', 422, 'application/json', `"${'x'.repeat(limits.bodyMaxBytes - 2)}"`],
    ['invalid-request', 422, 'application/json', '[]'],
    [
      'invalid-request',
      422,
      'application/json',
      JSON.stringify(trimBody({ conditions: { note: 'x\ud800' } })),
    ],
  ] as const)(
    'ASVS V5.2.1 a body that is %s gets %i, at the limit and a byte over it too',
    async (code, status, type, body) => {
      // By fetch: supertest would write some of these bodies as JSON of its own.
      const reply = await fetch(`${url}/api/v1/trims`, {
        method: 'POST',
        headers: {
          Authorization: `Bearer ${station.token}`,
          'Idempotency-Key': newKey(),
          'Content-Type': type,
        },
        body,
      })
      expect([reply.status, ((await reply.json()) as { code: string }).code]).toEqual([status, code])
    },
  )

  it('a compressed body is refused before it can unfold', async () => {
    const reply = await api(url, 'post', '/trims', {
      ...station,
      key: newKey(),
      headers: { 'Content-Type': 'application/json', 'Content-Encoding': 'gzip' },
    }).send('{}')
    expect([reply.status, reply.body.code]).toEqual([415, 'unsupported-media-type'])
  })

  it('ASVS V2.2.1 V2.2.3 every bad field is listed by pointer', async () => {
    const document = unipolar({
      title: '',
      ranges: [{ id: 'u10', lowV: 10, highV: 0 }],
      measurement: { points: [0, 999_999], plausiblePercent: 5 },
      extra: 1,
    })
    const reply = await api(url, 'post', '/designs', engineer).send({ key: 'BAD', document })
    expect(reply.status).toBe(422)
    const paths = reply.body.errors.map((error: { path: string }) => error.path)
    expect(paths).toEqual(expect.arrayContaining(['/document/title', '/document/extra']))
    const related = await api(url, 'post', '/designs', engineer).send({
      key: 'BAD',
      document: unipolar({ ranges: [{ id: 'u10', lowV: 10, highV: 0 }] }),
    })
    expect(related.body.errors).toMatchObject([{ path: '/document/ranges/0/highV' }])
  })

  it.each([
    '{"__proto__":{"admin":true}}',
    '{"design":"U18","unit":"X","constructor":{"prototype":{"a":1}}}',
    '{"design":"U18","unit":"X","conditions":{"__proto__":{"note":"x"}}}',
    '{"\\u005f_proto__":1}',
  ])('ASVS V1.5.2 a key that reaches a prototype is refused: %s', async (body) => {
    const reply = await api(url, 'post', '/trims', {
      ...station,
      key: newKey(),
      headers: { 'Content-Type': 'application/json' },
    }).send(body)
    expect([reply.status, reply.body.code]).toEqual([422, 'invalid-request'])
    expect(({} as { admin?: boolean }).admin).toBeUndefined()
  })

  it('ASVS V15.3.3 V8.2.3 fields that are not offered are refused wherever there is a body', async () => {
    await addPerson(harness, 'auditor')
    const auditor = { cookie: await signIn(url, 'auditor@example.org') }
    const asRole = { administrator: admin, engineer, operator: engineer, auditor }
    for (const endpoint of allEndpoints.filter(
      (one) => one.body && one.id !== 'signIn' && one.id !== 'setUp',
    )) {
      if (endpoint.access === 'open') continue
      const who = asRole[endpoint.access.roles[0]!]
      const path = endpoint.path
        .replace('/instruments/:id', '/instruments/DMM-1')
        .replace(':id', '01a230b2-a46d-7315-89af-a51980fdfb2a')
        .replace(':key', 'U18')
        .replace(':number', '1')
        .replace(':lot', 'L-1')
      const verb = endpoint.method.toLowerCase() as 'post' | 'put' | 'patch'
      const sent = api(url, verb, path, { ...who, key: newKey() }).buffer(true)
      if (endpoint.ndjson) sent.set('Content-Type', 'application/x-ndjson')
      const reply = await sent.send(
        endpoint.ndjson ? '{"isAdmin":true,"createdBy":"x"}' : { isAdmin: true, createdBy: 'x' },
      )
      // A line of a block has its problem in its own answer.
      const problem = endpoint.ndjson ? JSON.parse(reply.text.split('\n')[0]!).problem : reply.body
      expect(problem.status, endpoint.id).toBe(422)
      const paths = problem.errors.map((error: { path: string }) => error.path)
      expect(paths, endpoint.id).toEqual(expect.arrayContaining(['/isAdmin', '/createdBy']))
    }
  })

  it.each([-1, 0.5, 2 ** 24, 1e308, -0.0001])('ASVS V1.4.2 a code of %d is refused', async (code) => {
    const reply = await post(
      url,
      station,
      trimBody({
        points: [
          { code, measured: 0 },
          { code: 5, measured: 0.0001 },
        ],
      }),
      422,
    )
    expect(['invalid-request', 'code-out-of-range']).toContain(reply.code)
  })

  it('ASVS V1.4.2 numbers beyond a double, and times beyond a calendar, are refused', async () => {
    const raw = JSON.stringify(trimBody()).replace('"measured":0.000002', '"measured":1e999')
    expect(raw).toContain('1e999')
    const headers = { 'Content-Type': 'application/json' }
    const reply = await api(url, 'post', '/trims', { ...station, key: newKey(), headers }).send(raw)
    expect(reply.status).toBe(422)
    for (const measuredAt of [
      '0001-01-01T00:00:00Z',
      '9999-12-31T23:59:59-14:00',
      'yesterday',
      '2026-02-30T00:00:00Z',
    ]) {
      expect(await post(url, station, trimBody({ measuredAt }), 422)).toMatchObject({
        code: 'invalid-request',
      })
    }
  })
})

describe('ASVS V16.5.1 a defect of ours', () => {
  it('is an opaque 500 for the caller, and the whole story in the log', async () => {
    const { findByPk } = harness.database.models.records
    harness.database.models.records.findByPk = () =>
      Promise.reject(new TypeError('secret detail at /srv/x.ts, SELECT * FROM y'))
    const reply = await api(url, 'get', '/trims/01a230b2-a46d-7315-89af-a51980fdfb2a', station)
    harness.database.models.records.findByPk = findByPk
    expect([reply.status, reply.body.code]).toEqual([500, 'defect'])
    expect(JSON.stringify(reply.body)).not.toMatch(/secret detail|srv|SELECT|\.ts|at /)
    const line = harness.log.find((one) => one.request === reply.headers['x-request-id'])
    expect(line).toMatchObject({ level: 'error', problem: 'defect' })
    expect(JSON.stringify(line)).toContain('secret detail')
  })
})

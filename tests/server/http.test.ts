import { mkdirSync, writeFileSync } from 'node:fs'
import { connect } from 'node:net'
import { join } from 'node:path'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import { problem } from '../../shared/contract/problem.ts'
import { errorTable } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { trimBody, unipolar } from '../support/server-factories.ts'
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
let url: string
let station: { token: string }
let admin: { cookie: string }
let engineer: { cookie: string }

beforeAll(async () => {
  harness = await serverHarness()
  url = harness.url
  mkdirSync(join(harness.deps.config.webRoot, 'assets'), { recursive: true })
  writeFileSync(
    join(harness.deps.config.webRoot, 'index.html'),
    '<!doctype html><title>Ogee</title><div id="root"></div>',
  )
  writeFileSync(join(harness.deps.config.webRoot, 'assets/app-1a2b3c.js'), 'export {}')
  writeFileSync(join(harness.deps.config.webRoot, 'favicon.svg'), '<svg xmlns="http://www.w3.org/2000/svg"/>')
  await addDesign(harness, 'U18')
  station = await addToken(
    harness,
    ['trims:write', 'trims:read', 'designs:read'],
    (await addStation(harness, 'Station A')).id,
  )
  await addPerson(harness, 'administrator')
  await addPerson(harness, 'engineer')
  admin = { cookie: await signIn(url, 'administrator@example.org') }
  engineer = { cookie: await signIn(url, 'engineer@example.org') }
})
afterAll(() => harness.close())

const everyPath = [
  '/',
  '/bench/U18',
  '/assets/app-1a2b3c.js',
  '/favicon.svg',
  '/robots.txt',
  '/missing.png',
  '/healthz',
  '/readyz',
  '/problems/not-found',
  '/problems/nonsense',
  '/api',
  '/api/v1/openapi.json',
  '/api/v1/nothing',
  ...allEndpoints.map((endpoint) => `/api/v1${endpoint.path.replaceAll(/:(\w+)/g, 'x')}`),
]

describe('headers of every answer', () => {
  it('ASVS V3.4.4 V3.4.5 V3.4.6 nosniff, no referrer, no framing, no name of the software', async () => {
    for (const path of everyPath) {
      for (const method of ['get', 'post'] as const) {
        const { headers } = await request(url)[method](path)
        expect(headers['x-content-type-options'], path).toBe('nosniff')
        expect(headers['referrer-policy'], path).toBe('no-referrer')
        expect(headers['content-security-policy'], path).toContain("frame-ancestors 'none'")
        expect(headers['x-frame-options'], path).toBe('DENY')
        expect(headers['x-powered-by'], path).toBeUndefined()
        expect(headers['access-control-allow-origin'], path).toBeUndefined()
        expect(headers['strict-transport-security'], 'not on plain http').toBeUndefined()
      }
    }
  })

  it('ASVS V3.4.3 the page’s policy is an allow-list with Trusted Types and nothing unsafe', async () => {
    const { headers } = await request(url).get('/').set('Accept', 'text/html')
    expect(headers['content-security-policy']).toBe(
      [
        "default-src 'none'",
        "script-src 'self'",
        "style-src 'self'",
        "font-src 'self'",
        "connect-src 'self'",
        "worker-src 'self'",
        "manifest-src 'self'",
        "img-src 'self' blob:",
        "base-uri 'none'",
        "object-src 'none'",
        "frame-ancestors 'none'",
        "form-action 'self'",
        "require-trusted-types-for 'script'",
        'trusted-types ogee-worker',
      ].join(';'),
    )
  })

  it('ASVS V3.2.1 an answer that is no page cannot be opened as one', async () => {
    for (const path of [
      '/api/v1/ledger/key',
      '/api/v1/openapi.json',
      '/api/v1/nothing',
      '/healthz',
      '/problems/not-found',
    ]) {
      const { headers } = await request(url).get(path)
      expect(headers['content-security-policy'], path).toContain('sandbox')
      expect(headers['content-type'], path).not.toContain('html')
    }
  })

  it('ASVS V4.1.1 content types carry their charset', async () => {
    expect((await request(url).get('/api/v1/ledger/key')).headers['content-type']).toBe(
      'text/plain; charset=utf-8',
    )
    expect((await api(url, 'get', '/me', station)).headers['content-type']).toBe(
      'application/json; charset=utf-8',
    )
    expect((await request(url).get('/').set('Accept', 'text/html')).headers['content-type']).toBe(
      'text/html; charset=utf-8',
    )
  })

  it('ASVS V3.3.1 V3.3.3 V3.4.1 over TLS: __Host- cookie with Secure, and HSTS of a year on every route', async () => {
    const tls = await listen({
      ...harness.deps,
      config: { ...harness.deps.config, baseUrl: 'https://ogee.example', trustedHops: 1 },
    })
    const headers = { 'X-Forwarded-Proto': 'https', Origin: 'https://ogee.example' }
    const reply = await api(tls.url, 'post', '/session', { headers }).send({
      email: 'engineer@example.org',
      password: 'a password for tests only',
    })
    expect((reply.headers['set-cookie'] as unknown as string[])[0]).toMatch(
      /^__Host-ogee=[^;]+; Path=\/; HttpOnly; Secure; SameSite=Strict$/,
    )
    for (const path of everyPath) {
      const { headers: got } = await request(tls.url).get(path).set(headers)
      expect(
        Number(/max-age=(\d+)/.exec(got['strict-transport-security'] ?? '')?.[1]),
        path,
      ).toBeGreaterThanOrEqual(31_536_000)
    }
    await tls.stop()
  })
})

describe('the web app', () => {
  it('answers any view’s address with the page, uncached, and hashed files for ever', async () => {
    const page = await request(url).get('/history/01a2?x=1').set('Accept', 'text/html,*/*')
    expect([page.status, page.headers['cache-control']]).toEqual([200, 'no-cache'])
    expect(page.text).toContain('<div id="root">')
    const asset = await request(url).get('/assets/app-1a2b3c.js')
    expect(asset.headers['cache-control']).toBe('public, max-age=31536000, immutable')
    expect((await request(url).get('/favicon.svg')).status).toBe(200)
    expect((await request(url).get('/robots.txt')).text).toBe('User-agent: *\nDisallow: /\n')
  })

  it('answers what is missing with a problem, not with the page', async () => {
    for (const path of [
      '/missing.png',
      '/assets/gone.js',
      '/assets/../../ledger.key',
      '/%2e%2e/ledger.key',
      '/.env',
      '/api/v2/x',
      '/api/v1/x',
    ]) {
      const reply = await request(url).get(path).set('Accept', 'text/html,*/*')
      expect(reply.text, path).not.toContain('PRIVATE')
      if (reply.status !== 200) expect(problem.parse(reply.body).code, path).toBe('not-found')
      else expect(path).toBe('/%2e%2e/ledger.key')
    }
  })
})

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
  ] as const)('a body that is %s gets %i', async (code, status, type, body) => {
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
  })

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
    const asRole = { administrator: admin, engineer, operator: engineer }
    for (const endpoint of allEndpoints.filter(
      (one) => one.body && one.id !== 'signIn' && one.id !== 'setUp',
    )) {
      if (endpoint.access === 'open') continue
      const who = asRole[endpoint.access.roles[0] as 'administrator']
      const path = endpoint.path.replace(':id', '01a230b2-a46d-7315-89af-a51980fdfb2a')
      const verb = endpoint.method.toLowerCase() as 'post' | 'patch'
      const reply = await api(url, verb, path, { ...who, key: newKey() }).send({ isAdmin: true, id: 'x' })
      expect(reply.status, endpoint.id).toBe(422)
      const paths = reply.body.errors.map((error: { path: string }) => error.path)
      expect(paths, endpoint.id).toEqual(expect.arrayContaining(['/isAdmin', '/id']))
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

describe('ASVS V3.5.1 writes by cookie', () => {
  const own = () => ({ 'x-ogee': '1', 'Sec-Fetch-Site': 'same-origin', Origin: url })
  const attempt = (headers: Record<string, string>, type = 'application/json') => {
    const sent = request(url).post('/api/v1/stations').set('Cookie', admin.cookie).set('Content-Type', type)
    return sent.set(headers).send(JSON.stringify({ name: `Forged ${Math.random()}` }))
  }

  it('need our header and the browser’s word that they come from our page: 0 of 200 others pass', async () => {
    const before = await harness.database.models.stations.count()
    let tries = 0
    for (const site of ['cross-site', 'same-site', 'none', undefined, 'same-origin']) {
      for (const origin of ['https://evil.example', 'null', `${url}.evil.example`, undefined, url]) {
        for (const header of ['1', undefined, '0', 'true']) {
          for (const type of ['application/json', 'text/plain']) {
            const good =
              header === '1' && type === 'application/json' && (origin === url || origin === undefined)
            if (good && (site === 'same-origin' || (site === undefined && origin === url))) continue
            tries++
            const reply = await attempt(
              {
                ...(site ? { 'Sec-Fetch-Site': site } : {}),
                ...(origin ? { Origin: origin } : {}),
                ...(header ? { 'x-ogee': header } : {}),
              },
              type,
            )
            expect([403, 415], `${site} ${origin} ${header} ${type}`).toContain(reply.status)
          }
        }
      }
    }
    expect(tries).toBeGreaterThanOrEqual(190)
    expect(await harness.database.models.stations.count()).toBe(before)
    expect((await attempt(own())).status).toBe(201)
    const { 'Sec-Fetch-Site': _, ...older } = own()
    expect((await attempt(older)).status).toBe(201)
  })

  it('sign-in, sign-out and set-up too', async () => {
    const body = { email: 'engineer@example.org', password: 'a password for tests only' }
    for (const send of [
      request(url).post('/api/v1/session').send(body),
      request(url).delete('/api/v1/session').set('Cookie', engineer.cookie),
      request(url).post('/api/v1/setup').set('Sec-Fetch-Site', 'cross-site').set('x-ogee', '1').send({}),
    ]) {
      const reply = await send
      expect([reply.status, reply.body.code]).toEqual([403, 'cross-site-refused'])
    }
    expect((await api(url, 'get', '/me', engineer)).status).toBe(200)
  })

  it('ASVS V3.4.2 no other origin may read answers or ask beforehand', async () => {
    const preflight = await request(url)
      .options('/api/v1/stations')
      .set({ Origin: 'https://evil.example', 'Access-Control-Request-Method': 'POST' })
    expect(preflight.status).toBe(405)
    for (const name of Object.keys(preflight.headers)) expect(name).not.toMatch(/^access-control/)
  })
})

it('ASVS V3.5.3 reading changes nothing: every GET and HEAD twice leaves the database as it was', async () => {
  await harness.sequencer.drain()
  await new Promise((resolve) => setTimeout(resolve, 1_300))
  const checksum = async () => {
    const root = await harness.test.asRoot()
    const tables = await root.query<Record<string, string>[]>('SHOW TABLES')
    const names = tables.map((row) => Object.values(row)[0]!).filter((name) => name !== 'tokens')
    const sums = await root.query<{ Table: string; Checksum: bigint }[]>(`CHECKSUM TABLE ${names.join(', ')}`)
    await root.end()
    return sums.map((sum) => `${sum.Table} ${sum.Checksum}`)
  }
  const before = await checksum()
  for (const endpoint of allEndpoints.filter((one) => one.method === 'GET')) {
    const path = endpoint.path
      .replace(':key', 'U18')
      .replace(':number', '1')
      .replace(':id', '01a230b2-a46d-7315-89af-a51980fdfb2a')
    for (const send of [
      api(url, 'get', path, admin),
      api(url, 'get', path, station),
      request(url).head(`/api/v1${path}`),
    ])
      await send
  }
  expect(await checksum()).toEqual(before)
})

describe('ASVS V4.2.1 framing', () => {
  const raw = (text: string) =>
    new Promise<string>((resolve) => {
      const socket = connect(harness.port, '127.0.0.1')
      let answer = ''
      socket.on('data', (chunk) => {
        answer += chunk.toString('latin1')
      })
      socket.on('close', () => resolve(answer))
      socket.on('error', () => resolve(answer))
      socket.setTimeout(8_000, () => socket.destroy())
      socket.write(text)
    })
  const start = 'POST /api/v1/session HTTP/1.1\r\nHost: x\r\n'

  it.each([
    [
      'both lengths',
      `${start}Content-Length: 4\r\nTransfer-Encoding: chunked\r\n\r\n0\r\n\r\nGET /x HTTP/1.1\r\n\r\n`,
    ],
    ['two lengths', `${start}Content-Length: 4\r\nContent-Length: 5\r\n\r\nabcd`],
    ['a length with a sign', `${start}Content-Length: +4\r\n\r\nabcd`],
    ['an unknown coding', `${start}Transfer-Encoding: xchunked\r\n\r\n0\r\n\r\n`],
    ['a space before the colon', `${start}Content-Length : 4\r\n\r\nabcd`],
    ['a folded header', `${start}X-A: b\r\n c: d\r\nContent-Length: 0\r\n\r\n`],
    ['a bare line feed', `POST /api/v1/session HTTP/1.1\nHost: x\nContent-Length: 0\n\n`],
    ['no host', 'GET /healthz HTTP/1.1\r\n\r\n'],
    ['two hosts', 'GET /healthz HTTP/1.1\r\nHost: a\r\nHost: b\r\n\r\n'],
    ['no HTTP at all', 'hello there\r\n\r\n'],
    ['a NUL in a header', `GET /healthz HTTP/1.1\r\nHost: x\r\nX-A: a\u0000b\r\n\r\n`],
  ])('with %s gets 400 and is closed', async (_, text) => {
    const answer = await raw(text)
    expect(answer).toMatch(/^HTTP\/1\.1 400 /)
    expect(answer.match(/^HTTP\/1\.1 /gm)).toHaveLength(1)
    expect(answer.toLowerCase()).toContain('connection: close')
  })

  it('headers over 16 KiB get 431', async () => {
    const answer = await raw(`GET /healthz HTTP/1.1\r\nHost: x\r\nX-A: ${'a'.repeat(20_000)}\r\n\r\n`)
    expect(answer).toMatch(/^HTTP\/1\.1 431 /)
    expect(answer).toContain('"code":"header-too-large"')
  })
})

describe('ASVS V14.2.1 V16.2.5 secrets', () => {
  it('get into no log, whatever is sent and wherever', async () => {
    const before = harness.log.length
    const secret = station.token.split('_')[2]!
    await request(url).get(`/api/v1/me?access_token=${station.token}`)
    await request(url).get('/api/v1/me').set('Authorization', `Token ${station.token}`)
    await api(url, 'get', '/me', station)
    await api(url, 'post', '/session').send({ email: 'engineer@example.org', password: 'typed by mistake' })
    await api(url, 'post', '/stations', admin).send({ name: 'x', password: 'typed by mistake' })
    const text = JSON.stringify(harness.log.slice(before))
    expect(text.length).toBeGreaterThan(500)
    for (const one of [secret, 'typed by mistake', admin.cookie.slice(6, 40)]) expect(text).not.toContain(one)
  })
})

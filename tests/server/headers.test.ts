import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import { problem } from '../../shared/contract/problem.ts'
import { api } from '../support/server-client.ts'
import { type Harness, listen } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }

beforeAll(async () => {
  ;({ harness, url, station } = await serverScene())
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

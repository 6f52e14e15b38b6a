import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import { api } from '../support/server-client.ts'
import type { Harness } from '../support/server-harness.ts'
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

import { connect } from 'node:net'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api } from '../support/server-client.ts'
import type { Harness } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }
let admin: { cookie: string }

beforeAll(async () => {
  ;({ harness, url, station, admin } = await serverScene())
})
afterAll(() => harness.close())

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

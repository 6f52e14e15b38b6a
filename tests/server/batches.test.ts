import { once } from 'node:events'
import { connect } from 'node:net'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { type BatchEnd, batchAnswer } from '../../shared/contract/batches.ts'
import { canonicalText } from '../../shared/ledger/canonical.ts'
import { limits } from '../../shared/limits.ts'
import { api, newKey, post } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody } from '../support/server-factories.ts'
import { addStation, addToken, listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
beforeAll(async () => {
  scene = await serverScene()
})
afterAll(() => scene.harness.close())

type Line = Record<string, unknown>
type Outcome = {
  line: number
  key: string | null
  status: number
  record?: Record<string, never> & { id: string; unit: string }
  problem?: { code: string; detail: string; errors?: { path: string }[] }
}

const line = (change: Line = {}): Line => ({ key: newKey(), ...trimBody(change) })
const ndjson = (lines: readonly (Line | string)[]) =>
  lines.map((one) => `${typeof one === 'string' ? one : JSON.stringify(one)}\n`).join('')

async function send(
  lines: readonly (Line | string)[],
  { url = scene.url, token = scene.station.token }: { url?: string; token?: string } = {},
) {
  const reply = await api(url, 'post', '/batches', { token })
    .set('Content-Type', 'application/x-ndjson')
    .buffer(true)
    .parse(asText)
    .send(ndjson(lines))
  expect(reply.status, String(reply.body)).toBe(200)
  expect(reply.headers['content-type']).toBe('application/x-ndjson; charset=utf-8')
  expect(reply.headers['content-encoding']).toBeUndefined()
  const answers = String(reply.body)
    .trimEnd()
    .split('\n')
    .map((text) => JSON.parse(text) as Outcome)
  for (const answer of answers) batchAnswer.parse(answer)
  return { outcomes: answers.slice(0, -1), end: answers.at(-1) as unknown as BatchEnd }
}

function asText(reply: request.Response, done: (error: Error | null, body: unknown) => void) {
  let text = ''
  const stream = reply as unknown as NodeJS.ReadableStream
  stream.setEncoding('utf8')
  stream.on('data', (piece: string) => {
    text += piece
  })
  stream.on('end', () => done(null, text))
}

const brief = ({ line, status, problem }: Outcome) => [line, problem?.code ?? status]
const recordsOf = async (like: string) =>
  Number(
    (
      await scene.harness.database.sql.rows<{ n: number }>(
        'SELECT COUNT(*) AS n FROM records WHERE unit LIKE ?',
        [like],
      )
    )[0]!.n,
  )

describe('POST /batches', () => {
  it('answers in input order, each line with its own outcome, good ones recorded beside bad ones', async () => {
    const lines = [
      line({ unit: 'A-1' }),
      '{"key": "broken',
      line({ unit: 'A-2', lot: 'NONE' }),
      '   ',
      line({ unit: 'A-3', points: suspectPoints() }),
      line({ unit: 'A-4', surprise: 1 }),
      { ...line({ unit: 'A-5' }), key: 'with space' },
      trimBody({ unit: 'A-6' }),
      '[]',
      line({ unit: ' A-7' }),
      line({ unit: 'A-8', points: [{ code: 0, measured: 0 }] }),
      line({ unit: 'A-9', kind: 'verify', points: pointsOf() }),
    ]
    const { outcomes, end } = await send(lines)
    expect(outcomes.map(brief)).toEqual([
      [1, 201],
      [2, 'malformed-json'],
      [3, 'lot-unknown'],
      [5, 201],
      [6, 'invalid-request'],
      [7, 'invalid-request'],
      [8, 'invalid-request'],
      [9, 'invalid-request'],
      [10, 'invalid-request'],
      [11, 'too-few-codes'],
      [12, 201],
    ])
    expect(outcomes[0]!.key).toBe((lines[0] as Line).key)
    expect(outcomes[1]!.key).toBeNull()
    expect(outcomes[4]!.problem!.errors![0]!.path).toBe('/surprise')
    expect(end).toEqual({ end: true, lines: 11, recorded: 3, replayed: 0, refused: 8 })
    expect(await recordsOf('A-%')).toBe(3)
  })

  it('gives the same record as a single post, and either replays the other', async () => {
    const body = trimBody({ unit: 'B-1' })
    const key = newKey()
    const single = await post(scene.url, { ...scene.station, key }, body)
    const { outcomes, end } = await send([{ key, ...body }])
    const { notices, ...rest } = outcomes[0]!.record as unknown as Record<string, unknown>
    const { notices: none, ledger: _, ...before } = single
    expect(none).toEqual([])
    expect(notices).toEqual([expect.objectContaining({ code: 'replayed' })])
    expect(canonicalText({ ...before, ledger: null } as never)).toBe(
      canonicalText({ ...rest, ledger: null } as never),
    )
    expect(end).toMatchObject({ recorded: 0, replayed: 1 })
    const other = line({ unit: 'B-2' })
    const first = (await send([other])).outcomes[0]!.record!
    const { key: otherKey, ...otherBody } = other
    const again = await post(scene.url, { ...scene.station, key: otherKey as string }, otherBody)
    expect(again.id).toBe(first.id)
  })

  it('the same block again doubles nothing, whatever was changed in some of its lines', async () => {
    const lines = Array.from({ length: 150 }, (_, i) => line({ unit: `C-${i}` }))
    const first = await send(lines)
    expect(first.end).toEqual({ end: true, lines: 150, recorded: 150, replayed: 0, refused: 0 })
    const changed = lines.map((one, i) => (i === 70 ? { ...one, unit: 'C-other' } : one))
    const second = await send(changed)
    expect(second.end).toEqual({ end: true, lines: 150, recorded: 0, replayed: 149, refused: 1 })
    expect(brief(second.outcomes[70]!)).toEqual([71, 'idempotency-key-reused'])
    expect(second.outcomes.map(({ record }) => record?.id)).toEqual(
      first.outcomes.map(({ record }, i) => (i === 70 ? undefined : record!.id)),
    )
    expect(await recordsOf('C-%')).toBe(150)
  })

  it('the same line twice in a block is recorded once, and lines of one unit see each other in order', async () => {
    const first = line({ unit: 'D-1' })
    const verify = line({ unit: 'D-1', kind: 'verify', points: pointsOf() })
    const { outcomes } = await send([first, first, verify])
    expect(outcomes.map(({ status }) => status)).toEqual([201, 201, 201])
    expect(outcomes[1]!.record!.id).toBe(outcomes[0]!.record!.id)
    expect(outcomes[2]!.record).toMatchObject({ follows: outcomes[0]!.record!.id, pass: 1 })
    expect(await recordsOf('D-1')).toBe(2)
  })

  it('takes statements by a person in their place, and refuses them to a token', async () => {
    const suspect = line({ unit: 'E-1', points: suspectPoints() })
    const override = { follows: 'last', reason: 'looked at by hand', unit: 'E-1', design: 'U18' }
    const lines = [suspect, { ...override, kind: 'override', key: newKey() }]
    const reply = await api(scene.url, 'post', '/batches', scene.engineer)
      .set('Content-Type', 'application/x-ndjson')
      .buffer(true)
      .parse(asText)
      .send(ndjson(lines))
    const answers = String(reply.body)
      .trimEnd()
      .split('\n')
      .map((text) => JSON.parse(text))
    expect(answers[1].record).toMatchObject({ kind: 'override', follows: answers[0].record.id })
    const { outcomes } = await send([{ ...override, kind: 'override', key: newKey() }])
    expect(outcomes.map(brief)).toEqual([[1, 'override-needs-a-person']])
  })

  it('takes serials as they are: quotes, emoji, leading zeros', async () => {
    const serials = ['007', '7', 'a "quoted" one', '👩‍🔬 7', "O'Neil", 'ä', 'case', 'CASE']
    const { outcomes } = await send(serials.map((unit) => line({ unit })))
    expect(outcomes.map(({ record }) => record!.unit)).toEqual(serials)
    expect(new Set(outcomes.map(({ record }) => record!.id)).size).toBe(serials.length)
  })
})

describe('ASVS V2.4.1, V5.2.1 bounds of a block', () => {
  const raw = (type = 'application/x-ndjson') =>
    request(scene.url)
      .post('/api/v1/batches')
      .set('Authorization', `Bearer ${scene.station.token}`)
      .set('Content-Type', type)

  it('at most 1,000 lines, 8 MiB, 1 MiB a line; the right media type; a body at all', async () => {
    const tooMany = await raw().send('{}\n'.repeat(limits.batchMaxLines + 1))
    expect([tooMany.status, tooMany.body.code]).toEqual([413, 'body-too-large'])
    const enough = await raw().buffer(true).parse(asText).send('{}\n'.repeat(limits.batchMaxLines))
    expect(String(enough.body).trimEnd().split('\n')).toHaveLength(limits.batchMaxLines + 1)
    const tooLarge = await raw().send(' '.repeat(limits.batchMaxBytes + 1))
    expect([tooLarge.status, tooLarge.body.detail]).toEqual([
      413,
      'The body is larger than 8 MiB. Send less at once.',
    ])
    const longLine = { ...trimBody(), conditions: { note: 'x'.repeat(limits.bodyMaxBytes) }, key: newKey() }
    const { outcomes } = await send([longLine, line({ unit: 'F-1' })])
    expect(outcomes.map(brief)).toEqual([
      [1, 'body-too-large'],
      [2, 201],
    ])
    expect((await raw('application/json').send('{}')).status).toBe(415)
    expect((await raw().send()).body.code).toBe('malformed-json')
    const deep = await send([`{"points":${'['.repeat(50)}${']'.repeat(50)}}`, '{"__proto__":1,"key":"a"}'])
    expect(deep.outcomes.map(brief)).toEqual([
      [1, 'malformed-json'],
      [2, 'invalid-request'],
    ])
  })

  it('8 MiB of the longest sweeps: recorded, although their records together are longer than a statement may be', async () => {
    const points = Array.from({ length: limits.pointsMax }, (_, i) => ({
      code: i * 64,
      measured: (i * 64 * 10) / 2 ** 18 + Math.sin(i) * 1e-6,
    }))
    const sweeps = Array.from({ length: 24 }, (_, i) => line({ unit: `SWEEP-${i}`, points }))
    expect(ndjson(sweeps).length).toBeLessThan(limits.batchMaxBytes)
    const { outcomes, end } = await send(sweeps)
    expect(end).toMatchObject({ lines: 24, recorded: 24, refused: 0 })
    expect(JSON.stringify(outcomes).length).toBeGreaterThan(16 * 1024 * 1024)
  }, 120_000)

  it("each line counts against the token's allowance; a block that goes over is refused whole", async () => {
    const { deps } = scene.harness
    const small = await listen({ ...deps, quotas: { ...deps.quotas, requestsPerTokenMinute: 50 } })
    try {
      const { outcomes } = await send(
        Array.from({ length: 40 }, (_, i) => line({ unit: `G-${i}` })),
        { url: small.url },
      )
      expect(outcomes).toHaveLength(40)
      const over = await api(small.url, 'post', '/batches', scene.station)
        .set('Content-Type', 'application/x-ndjson')
        .send(ndjson(Array.from({ length: 11 }, (_, i) => line({ unit: `G-over-${i}` }))))
      expect(over.status).toBe(429)
      expect(Number(over.headers['retry-after'])).toBeGreaterThan(0)
      expect(await recordsOf('G-over-%')).toBe(0)
      // Another token is none the worse for it.
      await send([line({ unit: 'G-other' })], { url: small.url, token: scene.other.token })
    } finally {
      await small.stop()
    }
  })

  it('eight blocks of one caller may be under way, the ninth hears to come again; a place is free once one has gone', async () => {
    const port = Number(new URL(scene.url).port)
    const head = `POST /api/v1/batches HTTP/1.1\r\nHost: 127.0.0.1:${port}\r\nAuthorization: Bearer ${scene.station.token}\r\nContent-Type: application/x-ndjson\r\nContent-Length: 1000\r\n\r\n`
    const held = Array.from({ length: 8 }, () => connect(port, '127.0.0.1'))
    await Promise.all(held.map((socket) => once(socket, 'connect')))
    for (const socket of held) socket.write(`${head}{`)
    await eventually(async () => (await raw().send('{}\n')).status === 429)
    const refused = await raw().send('{}\n')
    expect([refused.status, refused.headers['retry-after']]).toEqual([429, '1'])
    for (const socket of held) socket.destroy()
    await eventually(async () => (await raw().send('{}\n')).status === 200)
  })
})

describe('what happens in the middle of a block', () => {
  it('S6: a token revoked halfway: what came before is recorded, the rest hears 401', async () => {
    const station = await addStation(scene.harness, 'Halfway')
    const token = await addToken(scene.harness, ['trims:write'], station.id)
    const lines = Array.from({ length: 300 }, (_, i) => line({ unit: `H-${i}` }))
    // Revoked while the server waits for us to read: its answer is far larger than what sockets hold.
    const reply = await fetch(`${scene.url}/api/v1/batches`, {
      method: 'POST',
      headers: { authorization: `Bearer ${token.token}`, 'content-type': 'application/x-ndjson' },
      body: ndjson([...lines, ...lines, ...lines]),
    })
    const reader = reply.body!.getReader()
    const pieces = [(await reader.read()).value!]
    expect((await api(scene.url, 'delete', `/tokens/${token.id}`, scene.admin)).status).toBe(204)
    for (let read = await reader.read(); !read.done; read = await reader.read()) pieces.push(read.value)
    const answers = Buffer.concat(pieces)
      .toString()
      .trimEnd()
      .split('\n')
      .map((text) => JSON.parse(text) as Outcome)
    const statuses = answers.slice(0, -1).map(({ status }) => status)
    const good = statuses.filter((status) => status === 201).length
    expect(good).toBeGreaterThan(0)
    expect(good).toBeLessThan(900)
    expect(statuses).toEqual([
      ...Array.from({ length: good }, () => 201),
      ...Array.from({ length: 900 - good }, () => 401),
    ])
    expect(await recordsOf('H-%')).toBe(Math.min(good, 300))
  })

  it('a caller who leaves: the server stops making records for nobody', async () => {
    const lines = Array.from({ length: 1_000 }, (_, i) => line({ unit: `I-${i}` }))
    const leave = new AbortController()
    const reply = await fetch(`${scene.url}/api/v1/batches`, {
      method: 'POST',
      headers: { authorization: `Bearer ${scene.other.token}`, 'content-type': 'application/x-ndjson' },
      body: ndjson(lines),
      signal: leave.signal,
    })
    await reply.body!.getReader().read()
    leave.abort()
    await eventually(async () => {
      const before = await recordsOf('I-%')
      await new Promise((resolve) => setTimeout(resolve, 300))
      return (await recordsOf('I-%')) === before
    })
    expect(await recordsOf('I-%')).toBeLessThan(1_000)
    // The same block again goes on where that one stopped.
    const { end } = await send(lines, { token: scene.other.token })
    expect(end).toMatchObject({ lines: 1_000, refused: 0 })
    expect(await recordsOf('I-%')).toBe(1_000)
  })
})

async function eventually(holds: () => Promise<boolean>): Promise<void> {
  for (let tries = 0; tries < 200; tries++) {
    if (await holds()) return
    await new Promise((resolve) => setTimeout(resolve, 25))
  }
  throw new Error('It did not come to hold.')
}

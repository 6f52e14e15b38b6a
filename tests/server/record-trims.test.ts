import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api, newKey, post } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import type { Harness } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }
let engineer: { cookie: string }
let currentOf: Scene['currentOf']

beforeAll(async () => {
  ;({ harness, url, station, engineer, currentOf } = await serverScene())
})
afterAll(() => harness.close())

describe('a trim', () => {
  it('is computed by the server and becomes the unit’s current codes', async () => {
    const record = await post(url, station, trimBody({ unit: 'T-1' }))
    expect(record).toMatchObject({
      format: 'ogee.record/1',
      kind: 'trim',
      unit: 'T-1',
      channel: '1',
      range: 'u10',
      design: 'U18',
      revision: 1,
      pass: 1,
      follows: null,
      applied: 'neutral',
      verdict: 'ok',
      accepted: true,
      station: 'Station A',
      by: { kind: 'token', name: 'Test token' },
      notices: [],
      ledger: null,
    })
    expect(record.result.trim.codes).toEqual({ gain: expect.any(Number), offset: expect.any(Number) })
    expect(record.points).toEqual(pointsOf({ gainPpm: -203, offsetV: 2e-6 }))
    const current = await currentOf('T-1')
    expect(current).toMatchObject({
      codes: record.result.trim.codes,
      words: record.result.trim.words,
      record: record.id,
      number: record.number,
      lastRecord: record.id,
      pass: 1,
    })
  })

  it('out of reach is recorded with no codes, and leaves the current ones', async () => {
    const first = await post(url, station, trimBody({ unit: 'T-2' }))
    const record = await post(
      url,
      station,
      trimBody({ unit: 'T-2', applied: 'neutral', points: pointsOf({ gainPpm: -1900 }) }),
    )
    expect(record).toMatchObject({ verdict: 'out-of-reach', accepted: false })
    expect(record.result.trim.codes).toBeNull()
    expect(await currentOf('T-2')).toMatchObject({ record: first.id, lastRecord: record.id })
  })

  it('ASVS V2.3.1 of a unit with current codes must say which codes were applied', async () => {
    const first = await post(url, station, trimBody({ unit: 'T-3' }))
    const refused = await post(url, station, trimBody({ unit: 'T-3' }), 422)
    expect(refused).toMatchObject({ code: 'applied-required', errors: [{ path: '/applied' }] })
    const applied = first.result.trim.codes
    const again = await post(
      url,
      station,
      trimBody({ unit: 'T-3', applied, follows: 'last', points: pointsOf({ gainPpm: 0.3 }) }),
    )
    expect(again).toMatchObject({ pass: 2, follows: first.id, applied })
  })

  it('learns through a verification measured with the same codes from what was measured before them', async () => {
    const unit = 'T-10'
    const first = await post(url, station, trimBody({ unit, points: pointsOf({ gainPpm: -300 }) }))
    const applied = first.result.trim.codes
    const left = { unit, points: pointsOf({ gainPpm: 12 }) }
    const verified = await post(url, station, trimBody({ ...left, kind: 'verify' }))
    const again = await post(url, station, trimBody({ ...left, kind: 'verify', applied }))
    expect([verified.follows, again.follows]).toEqual([first.id, verified.id])
    const learned = { ...left, applied, follows: 'last', effects: 'learned' }
    const second = await post(url, station, trimBody(learned))
    expect(second).toMatchObject({ follows: again.id, pass: 2 })
    const direct = await post(url, station, trimBody({ ...learned, follows: first.id }))
    expect(second.result.trim.effects).toEqual(direct.result.trim.effects)
    expect(second.result.trim.effects.gain).toMatchObject({ source: 'learned' })
    expect(second.notices).toEqual([])
  })

  it('learns effects from the measurement that it follows', async () => {
    const first = await post(
      url,
      station,
      trimBody({ unit: 'T-4', points: pointsOf({ gainPpm: -300, offsetV: 5e-6 }) }),
    )
    const applied = first.result.trim.codes
    const body = {
      unit: 'T-4',
      applied,
      follows: first.id,
      effects: 'learned',
      points: pointsOf({ gainPpm: 12, offsetV: 1e-6 }),
    }
    const second = await post(url, station, trimBody(body))
    expect(second.result.trim.effects.gain).toMatchObject({
      source: 'learned',
      factor: expect.closeTo(1.04, 1),
    })
    await post(url, station, trimBody({ unit: 'T-9', effects: 'learned' }), 422).then((problem) => {
      expect(problem.code).toBe('follows-unknown')
    })
  })

  it('needs a channel and a range where there are several, and knows them', async () => {
    const body = { design: 'TWO', unit: 'T-5', points: pointsOf() }
    expect(await post(url, station, body, 422)).toMatchObject({ code: 'channel-required' })
    expect(await post(url, station, { ...body, channel: 'a' }, 422)).toMatchObject({ code: 'range-required' })
    expect(await post(url, station, { ...body, channel: 'z', range: 'u10' }, 422)).toMatchObject({
      code: 'channel-unknown',
    })
    expect(await post(url, station, { ...body, channel: 'a', range: 'u9' }, 422)).toMatchObject({
      code: 'range-unknown',
    })
    await post(url, station, { ...body, channel: 'a', range: 'u10' })
    // Another channel of the same unit has no codes yet, so nothing need be said about applied ones.
    await post(url, station, { ...body, channel: 'b', range: 'u10' })
  })

  it.each([
    ['not-found', { design: 'NONE' }, 404],
    ['revision-not-released', { revision: 7 }, 422],
    ['lot-unknown', { lot: 'L9' }, 422],
    ['instrument-unknown', { conditions: { instrument: 'M1' } }, 422],
    ['follows-unknown', { follows: 'last' }, 422],
    ['follows-unknown', { follows: '01a230b2-a46d-7315-89af-a51980fdfb2a' }, 422],
    ['too-few-codes', { points: [{ code: 0, measured: 0 }] }, 422],
    [
      'too-few-codes',
      {
        points: [
          { code: 5, measured: 0 },
          { code: 5, measured: 0.0001 },
        ],
      },
      422,
    ],
    ['implausible-point', { points: pointsOf().map((p) => ({ ...p, measured: p.measured * 1000 })) }, 422],
    [
      'code-out-of-range',
      {
        points: [
          { code: 0, measured: 0 },
          { code: 262144, measured: 10 },
        ],
      },
      422,
    ],
    [
      'outside-range',
      {
        points: [
          { code: 0, measured: 0 },
          { target: 11, measured: 11 },
        ],
      },
      422,
    ],
    ['uncertainty-not-positive', { points: pointsOf().map((p) => ({ ...p, uncertainty: 0 })) }, 422],
    ['applied-unknown', { applied: { gain: 4096, offset: 0 } }, 422],
    ['invalid-request', { points: undefined }, 422],
    ['invalid-request', { points: [{ code: 0, measured: 'x' }] }, 422],
    ['invalid-request', { unit: ' S' }, 422],
    ['invalid-request', { extra: 1 }, 422],
  ])(
    'ASVS V2.2.2 is refused by the server as %s for %j, and leaves nothing',
    async (code, change, status) => {
      const unit = 'R-1'
      const problem = await post(url, station, trimBody({ unit, ...change }), status)
      expect(problem.code).toBe(code)
      const units = await api(url, 'get', `/units?serial=${unit}`, station)
      expect(units.body.items).toEqual([])
    },
  )

  it('keeps serials apart that differ only in case or in trailing letters', async () => {
    for (const unit of ['k-1', 'K-1', 'K-1 x', 'É', 'E']) await post(url, station, trimBody({ unit }))
    const reply = await api(url, 'get', '/units?serial=K-1', station)
    expect(reply.body.items.map((unit: { serial: string }) => unit.serial)).toEqual(['K-1'])
  })
})

describe('a verification', () => {
  it('follows the last measurement with its codes, and says how it went', async () => {
    const trim = await post(url, station, trimBody({ unit: 'V-1' }))
    const good = await post(
      url,
      station,
      trimBody({ unit: 'V-1', kind: 'verify', points: pointsOf({ gainPpm: 0.1 }) }),
    )
    expect(good).toMatchObject({
      kind: 'verify',
      follows: trim.id,
      pass: 1,
      applied: trim.result.trim.codes,
      verdict: 'pass',
      accepted: true,
    })
    const bad = await post(
      url,
      station,
      trimBody({ unit: 'V-1', kind: 'verify', points: pointsOf({ gainPpm: 50 }) }),
    )
    expect(bad).toMatchObject({ follows: good.id, verdict: 'fail', accepted: false })
    expect(await currentOf('V-1')).toMatchObject({ record: trim.id, lastRecord: bad.id })
  })

  it('of an untouched unit takes it as neutral', async () => {
    const record = await post(url, station, trimBody({ unit: 'V-2', kind: 'verify' }))
    expect(record).toMatchObject({ follows: null, pass: 0, applied: 'neutral' })
  })
})

it('records the same for an engineer in person, without a station', async () => {
  const reply = await api(url, 'post', '/trims', { ...engineer, key: newKey() }).send(
    trimBody({ unit: 'P-1' }),
  )
  expect(reply.status).toBe(201)
  expect(reply.body).toMatchObject({ station: null, by: { kind: 'person', role: 'engineer' } })
})

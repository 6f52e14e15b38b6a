import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { computeCodes } from '../../shared/solver/codes.ts'
import type { Design } from '../../shared/solver/types.ts'
import { verifyPoints } from '../../shared/solver/verify.ts'
import { api, newKey, post } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody, unipolar } from '../support/server-factories.ts'
import type { Harness } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }
let admin: { cookie: string }
let engineer: { cookie: string }

const dayMs = 86_400_000
const day = (shift: number) => new Date(Date.now() + shift * dayMs).toISOString().slice(0, 10)
const meter = (id: string, change: object = {}) => ({
  id,
  serial: `SN ${id}`,
  title: 'Reference meter, 8½ digits',
  gainPpm: 4,
  offsetV: 3e-6,
  calibratedOn: day(-300),
  dueOn: day(60),
  ...change,
})

beforeAll(async () => {
  ;({ harness, url, station, admin, engineer } = await serverScene())
  for (const one of [
    meter('DMM-07'),
    meter('DMM-08', { dueOn: day(-1) }),
    meter('DMM-09', { gainPpm: 0.5 }),
    meter('DMM-10', { dueOn: day(0) }),
  ])
    await add(one)
})
afterAll(() => harness.close())

const add = async (body: object, status = 201) => {
  const reply = await api(url, 'post', '/instruments', admin).send(body)
  expect(reply.status, JSON.stringify(reply.body)).toBe(status)
  return reply.body
}
const patch = (id: string, body: object, ifMatch: string) =>
  api(url, 'patch', `/instruments/${id}`, { ...admin, headers: { 'If-Match': ifMatch } }).send(body)
const list = async () => (await api(url, 'get', '/instruments', station)).body
const one = async (id: string) => (await list()).items.find((item: { id: string }) => item.id === id)
const allow = (overdueAllowed: boolean, as = admin) =>
  api(url, 'put', '/instrument-rule', as).send({ overdueAllowed })
const by = (instrument: string, change: object = {}) => trimBody({ conditions: { instrument }, ...change })

describe('keeping instruments', () => {
  it('lists them by id, retired ones last, and keeps an id for ever', async () => {
    await add(meter('AAA-1'))
    expect((await patch('AAA-1', { retired: true }, '*')).status).toBe(200)
    const { items, overdueAllowed } = await list()
    expect(items.map((item: { id: string }) => item.id)).toEqual([
      'DMM-07',
      'DMM-08',
      'DMM-09',
      'DMM-10',
      'AAA-1',
    ])
    expect(overdueAllowed).toBe(false)
    const taken = await add(meter('AAA-1'), 409)
    expect(taken).toMatchObject({ code: 'already-exists', errors: [{ path: '/id' }] })
    expect((await patch('AAA-1', { title: 'Another' }, '*')).body.code).toBe('instrument-retired')
    // A retry after a lost answer.
    expect((await patch('AAA-1', { retired: true }, '"1"')).status).toBe(200)
  })

  it('takes no due day before the calibration, no negative limit, no day that does not exist', async () => {
    await add(meter('X', { dueOn: day(-301) }), 422)
    await add(meter('X', { gainPpm: -1 }), 422)
    await add(meter('X', { dueOn: '2026-02-30' }), 422)
    await add(meter('X Y'), 422)
    const found = await one('DMM-09')
    const reply = await patch('DMM-09', { dueOn: day(-301) }, found.etag)
    expect(reply.body).toMatchObject({ code: 'invalid-request', errors: [{ path: '/dueOn' }] })
  })

  it('lets one of two who saw the same state change it, and tells the other who did', async () => {
    const { etag } = await add(meter('DMM-11'))
    expect((await patch('DMM-11', { title: 'First' }, etag)).body).toMatchObject({ title: 'First' })
    const late = await patch('DMM-11', { title: 'Second' }, etag)
    expect(late.status).toBe(412)
    expect(late.body.detail).toContain('Test administrator changed instrument DMM-11')
    expect((await patch('DMM-11', { title: 'First' }, etag)).status).toBe(200)
    expect(await one('DMM-11')).toMatchObject({ title: 'First', changedBy: 'Test administrator' })
  })

  it('is for administrators: an engineer neither moves a due day nor lifts the rule', async () => {
    const headers = { 'If-Match': '*' }
    const reply = api(url, 'patch', '/instruments/DMM-08', { ...engineer, headers })
    expect((await reply.send({ dueOn: day(9) })).status).toBe(403)
    expect((await allow(true, engineer)).status).toBe(403)
  })
})

describe('recording with an instrument', () => {
  const design = unipolar() as unknown as Design

  it('copies its facts into the record and takes its limits for every uncertainty', async () => {
    const record = await post(url, station, by('DMM-07', { unit: 'I-1' }))
    expect(record.instrument).toEqual(meter('DMM-07'))
    const instrument = { id: 'DMM-07', gainPpm: 4, offsetV: 3e-6 }
    expect(record.result.fit.instrument).toEqual(instrument)
    const own = computeCodes(design, record.points, { instrument, applied: 'neutral' })
    expect(record.result.fit.expandedUncertainty).toEqual(own.fit.expandedUncertainty)
    const without = computeCodes(design, record.points, { applied: 'neutral' })
    expect(record.result.fit.expandedUncertainty.gainPpm).toBeGreaterThan(
      without.fit.expandedUncertainty!.gainPpm,
    )
    const left = { unit: 'I-1', kind: 'verify', points: pointsOf() }
    const verified = await post(url, station, by('DMM-07', left))
    const judged = verifyPoints(design, verified.points, { instrument })
    expect(verified.result.points).toEqual(judged.points)
  })

  it('keeps in old records what was true then', async () => {
    const before = await post(url, station, by('DMM-07', { unit: 'I-2' }))
    const { etag } = await one('DMM-07')
    await patch('DMM-07', { gainPpm: 9, dueOn: day(200) }, etag)
    const after = await post(url, station, by('DMM-07', { unit: 'I-3' }))
    expect(after.instrument).toMatchObject({ gainPpm: 9, dueOn: day(200) })
    const again = (await api(url, 'get', `/trims/${before.id}`, engineer)).body
    expect(again.instrument).toEqual(meter('DMM-07'))
    const { etag: now } = await one('DMM-07')
    await patch('DMM-07', { gainPpm: 4, dueOn: day(60) }, now)
  })

  it('names no instrument where none was named', async () => {
    const record = await post(url, station, trimBody({ unit: 'I-4' }))
    expect(record).not.toHaveProperty('instrument')
  })

  it.each([
    ['instrument-unknown', 'DMM-99', 422],
    ['instrument-retired', 'AAA-1', 409],
    ['instrument-overdue', 'DMM-08', 422],
  ])('refuses %s at its field', async (code, id, status) => {
    const refused = await post(url, station, by(id, { unit: `I-5-${code}` }), status)
    expect(refused).toMatchObject({ code, errors: [{ path: '/conditions/instrument' }] })
    const { items } = (await api(url, 'get', `/units?serial=I-5-${code}`, station)).body
    expect(items).toEqual([])
  })

  it('takes the due day itself as the last good day', async () => {
    expect((await post(url, station, by('DMM-10', { unit: 'I-6' }))).notices).toEqual([])
  })

  it('judges by when it measured: before the due day good, whenever it is sent', async () => {
    const measuredAt = `${day(-2)}T10:00:00Z`
    expect((await post(url, station, by('DMM-08', { unit: 'I-7', measuredAt }))).notices).toEqual([])
    const spooled = { solver: '1.0.0', codes: null, at: measuredAt }
    const sent = await post(url, station, by('DMM-08', { unit: 'I-8', claimed: spooled }))
    expect(sent.notices.map((notice: { code: string }) => notice.code)).toEqual(['claimed-codes-differ'])
    // Where nobody says when, the points do: what waited in a spool is as good as it was.
    const readAt = `${day(-2)}T09:00:00Z`
    const points = pointsOf({ gainPpm: -203 }).map((point) => ({ ...point, readAt }))
    const waited = await post(url, station, by('DMM-08', { unit: 'I-6-waited', points }))
    expect(waited).toMatchObject({ measuredAt: readAt, notices: [] })
    // A clock that runs ahead by months makes nothing overdue.
    const ahead = `${day(90)}T10:00:00Z`
    const skewed = await post(url, station, by('DMM-07', { unit: 'I-9', measuredAt: ahead }))
    expect(skewed.notices.map((notice: { code: string }) => notice.code)).toEqual(['clock-skew'])
  })

  it('records an overdue one where the site allows it, and says so for ever', async () => {
    expect((await allow(true)).status).toBe(200)
    expect((await list()).overdueAllowed).toBe(true)
    const record = await post(url, station, by('DMM-08', { unit: 'I-10' }))
    const message = `DMM-08 was due on ${day(-1)}. The site allows it.`
    expect(record.notices).toEqual([{ code: 'instrument-overdue', message }])
    await allow(false)
    await post(url, station, by('DMM-08', { unit: 'I-11' }), 422)
    const stored = (await api(url, 'get', `/trims/${record.id}`, engineer)).body
    expect(stored.notices).toEqual([{ code: 'instrument-overdue', message }])
  })

  it('replays a record although its instrument is overdue by now', async () => {
    const key = newKey()
    const body = by('DMM-10', { unit: 'I-12' })
    const first = await post(url, { ...station, key }, body)
    harness.clock.shiftMs = 2 * dayMs
    try {
      await post(url, station, by('DMM-10', { unit: 'I-13' }), 422)
      const again = await post(url, { ...station, key }, body)
      expect(again.id).toBe(first.id)
    } finally {
      harness.clock.shiftMs = 0
    }
  })

  it('takes none for what is said about a record', async () => {
    const suspect = await post(url, station, trimBody({ unit: 'I-14', points: suspectPoints() }))
    const override = { design: 'U18', unit: 'I-14', follows: suspect.id, reason: 'Looked at by eye twice.' }
    const body = { kind: 'override', ...override, conditions: { instrument: 'DMM-07' } }
    expect((await post(url, engineer, body, 422)).errors).toMatchObject([{ path: '/conditions/instrument' }])
  })
})

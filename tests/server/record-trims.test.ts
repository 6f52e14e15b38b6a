import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody, unipolar } from '../support/server-factories.ts'
import {
  addDesign,
  addPerson,
  addStation,
  addToken,
  type Harness,
  serverHarness,
} from '../support/server-harness.ts'

let harness: Harness
let url: string
let station: { token: string }
let other: { token: string }
let engineer: { cookie: string }
let operator: { cookie: string }

beforeAll(async () => {
  harness = await serverHarness()
  url = harness.url
  await addDesign(harness, 'U18')
  await addDesign(
    harness,
    'TWO',
    unipolar({
      channels: ['a', 'b'],
      ranges: [
        { id: 'u10', lowV: 0, highV: 10 },
        { id: 'u5', lowV: 0, highV: 5 },
      ],
    }),
  )
  const a = await addStation(harness, 'Station A')
  const b = await addStation(harness, 'Station B')
  station = await addToken(harness, ['trims:write', 'trims:read'], a.id)
  other = await addToken(harness, ['trims:write', 'trims:read'], b.id)
  await addPerson(harness, 'engineer')
  await addPerson(harness, 'operator')
  engineer = { cookie: await signIn(url, 'engineer@example.org') }
  operator = { cookie: await signIn(url, 'operator@example.org') }
})
afterAll(() => harness.close())

const currentOf = async (serial: string) => {
  const reply = await api(url, 'get', `/units?serial=${serial}`, station)
  return reply.body.items[0].current[0]
}

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

  it('of a unit with current codes must say which codes were applied', async () => {
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
  ])('is refused as %s for %j, and leaves nothing', async (code, change, status) => {
    const unit = 'R-1'
    const problem = await post(url, station, trimBody({ unit, ...change }), status)
    expect(problem.code).toBe(code)
    const units = await api(url, 'get', `/units?serial=${unit}`, station)
    expect(units.body.items).toEqual([])
  })

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

describe('an override', () => {
  const reason = 'Seen on the bench: connector reseated.'

  it('by an engineer makes a suspect record’s codes current and says so on it', async () => {
    const suspect = await post(url, station, trimBody({ unit: 'O-1', points: suspectPoints() }))
    expect(suspect).toMatchObject({ verdict: 'suspect', accepted: false })
    expect(suspect.result.trim.codes).not.toBeNull()
    expect(await currentOf('O-1')).toMatchObject({ codes: null, record: null, lastRecord: suspect.id })
    const body = { kind: 'override', design: 'U18', unit: 'O-1', follows: suspect.id, reason }
    const override = await post(url, engineer, body)
    expect(override).toMatchObject({
      kind: 'override',
      verdict: 'suspect',
      accepted: true,
      result: null,
      follows: suspect.id,
      reason,
    })
    expect(await currentOf('O-1')).toMatchObject({
      codes: suspect.result.trim.codes,
      record: suspect.id,
      lastRecord: override.id,
    })
    const seen = await api(url, 'get', `/trims/${suspect.id}`, engineer)
    expect(seen.body.accepted).toBe(false)
    expect(seen.body.notices).toMatchObject([{ code: 'overridden', record: override.id }])
    expect(await post(url, engineer, body, 422)).toMatchObject({ code: 'override-not-suspect' })
  })

  it('is for engineers in person, with a reason, of suspect trims', async () => {
    const suspect = await post(url, station, trimBody({ unit: 'O-2', points: suspectPoints() }))
    const body = { kind: 'override', design: 'U18', unit: 'O-2', follows: suspect.id, reason }
    expect(await post(url, station, body, 403)).toMatchObject({ code: 'override-needs-a-person' })
    expect(await post(url, operator, body, 403)).toMatchObject({ code: 'forbidden' })
    expect(await post(url, engineer, { ...body, reason: 'too short' }, 422)).toMatchObject({
      code: 'reason-required',
    })
    expect(await post(url, engineer, { ...body, points: pointsOf() }, 422)).toMatchObject({
      code: 'invalid-request',
    })
    const fine = await post(url, station, trimBody({ unit: 'O-3' }))
    expect(await post(url, engineer, { ...body, unit: 'O-3', follows: fine.id }, 422)).toMatchObject({
      code: 'override-not-suspect',
    })
  })
})

describe('a withdrawal', () => {
  const withdraw = (unit: string, follows: string) => ({
    kind: 'withdraw',
    design: 'U18',
    unit,
    follows,
    reason: 'The wrong unit was on the bench.',
  })

  it('takes a record out of what counts, and the codes before it come back', async () => {
    const first = await post(url, station, trimBody({ unit: 'W-1' }))
    const applied = first.result.trim.codes
    const second = await post(
      url,
      station,
      trimBody({ unit: 'W-1', applied, follows: 'last', points: pointsOf({ gainPpm: 40 }) }),
    )
    expect(await currentOf('W-1')).toMatchObject({ record: second.id, pass: 2 })
    const gone = await post(url, engineer, withdraw('W-1', second.id))
    expect(await currentOf('W-1')).toMatchObject({
      record: first.id,
      codes: applied,
      pass: 1,
      lastRecord: gone.id,
    })
    const seen = await api(url, 'get', `/trims/${second.id}`, engineer)
    expect(seen.body.notices).toMatchObject([{ code: 'withdrawn', record: gone.id }])
    expect(await post(url, engineer, withdraw('W-1', second.id), 409)).toMatchObject({
      code: 'already-withdrawn',
    })
    expect(await post(url, engineer, withdraw('W-1', gone.id), 422)).toMatchObject({
      code: 'follows-unknown',
    })
    const verify = await post(url, station, trimBody({ unit: 'W-1', kind: 'verify', points: pointsOf() }))
    expect(verify.follows).toBe(first.id)
    await post(url, engineer, withdraw('W-1', first.id))
    expect(await currentOf('W-1')).toMatchObject({ record: null, codes: null })
  })

  it('of an override takes its codes back', async () => {
    const suspect = await post(url, station, trimBody({ unit: 'W-2', points: suspectPoints() }))
    const reason = 'Looked at by two engineers.'
    const override = await post(url, engineer, {
      kind: 'override',
      design: 'U18',
      unit: 'W-2',
      follows: suspect.id,
      reason,
    })
    await post(url, engineer, withdraw('W-2', override.id))
    expect(await currentOf('W-2')).toMatchObject({ codes: null, record: null })
  })

  it('is for engineers', async () => {
    const record = await post(url, station, trimBody({ unit: 'W-3' }))
    expect(await post(url, operator, withdraw('W-3', record.id), 403)).toMatchObject({ code: 'forbidden' })
    expect(await post(url, station, withdraw('W-3', record.id), 403)).toMatchObject({
      code: 'override-needs-a-person',
    })
  })
})

describe('notices', () => {
  it('tells who based a trim on an older record that another station was first', async () => {
    const first = await post(url, station, trimBody({ unit: 'N-1' }))
    const applied = first.result.trim.codes
    const follow = { unit: 'N-1', applied, follows: first.id, points: pointsOf({ gainPpm: 1 }) }
    const second = await post(url, other, trimBody(follow))
    expect(second.notices).toEqual([])
    const late = await post(url, station, trimBody(follow))
    expect(late.notices).toMatchObject([{ code: 'newer-record', record: second.id }])
  })

  it('tells a station whose clock runs ahead, and one whose codes differ', async () => {
    const at = new Date(Date.now() + 300_000).toISOString()
    const record = await post(
      url,
      station,
      trimBody({
        unit: 'N-2',
        measuredAt: at,
        claimed: { solver: '1.0.0', codes: { gain: 1, offset: 1 }, at },
      }),
    )
    expect(record.notices.map((notice: { code: string }) => notice.code)).toEqual([
      'clock-skew',
      'claimed-codes-differ',
    ])
    expect(record.claimed.codes).toEqual({ gain: 1, offset: 1 })
    const { codes } = record.result.trim
    const same = await post(
      url,
      station,
      trimBody({ unit: 'N-3', claimed: { solver: '1.0.0', codes, at: new Date().toISOString() } }),
    )
    expect(same.notices).toEqual([])
  })

  it('accepts a fresh unit under a withdrawn revision only when it was done before', async () => {
    await addDesign(harness, 'OLD')
    await post(url, station, trimBody({ design: 'OLD', unit: 'N-4' }))
    await harness.database.sql.run(
      `UPDATE revisions r JOIN designs d ON d.id = r.design_id SET r.state = 'withdrawn', r.withdrawn_at = UTC_TIMESTAMP(3)
        WHERE d.design_key = 'OLD'`,
    )
    const fresh = { design: 'OLD', unit: 'N-5' }
    expect(await post(url, station, trimBody(fresh), 422)).toMatchObject({ code: 'revision-withdrawn' })
    const early = await post(url, station, trimBody({ ...fresh, measuredAt: '2025-01-01T00:00:00Z' }))
    expect(early.notices).toMatchObject([{ code: 'revision-withdrawn' }])
    const known = await post(url, station, trimBody({ design: 'OLD', unit: 'N-4', applied: 'neutral' }))
    expect(known.notices).toMatchObject([{ code: 'revision-withdrawn' }])
    const claimed = { solver: '1.0.0', codes: null, at: '2026-01-01T00:00:00Z' }
    await post(url, station, trimBody({ design: 'OLD', unit: 'N-6', claimed }))
  })
})

describe('the list', () => {
  it('goes through all records newest first, page by page, and filters', async () => {
    const seen: { id: string; recordedAt: string }[] = []
    let after: string | null = null
    do {
      const query: string = after === null ? '' : `&after=${encodeURIComponent(after)}`
      const page = await api(url, 'get', `/trims?limit=7${query}`, engineer)
      expect(page.status).toBe(200)
      seen.push(...page.body.items)
      after = page.body.next
    } while (after !== null)
    const [count] = await harness.database.sql.rows<{ n: number }>('SELECT COUNT(*) AS n FROM records')
    expect(new Set(seen.map((line) => line.id)).size).toBe(count!.n)
    const times = seen.map((line) => Date.parse(line.recordedAt))
    expect(times).toEqual(times.toSorted((a, b) => b - a))
    const verifies = await api(url, 'get', '/trims?kind=verify&unit=V-1', engineer)
    expect(verifies.body.items.map((line: { verdict: string }) => line.verdict)).toEqual(['fail', 'pass'])
    const wrong = await api(url, 'get', '/trims?after=x', engineer)
    expect(wrong.body).toMatchObject({ code: 'invalid-request', errors: [{ path: '/after' }] })
  })

  it('shows a station’s token its own records only, and hides the others wholly', async () => {
    const mine = await post(url, other, trimBody({ unit: 'L-1' }))
    const list = await api(url, 'get', '/trims?unit=L-1', station)
    expect(list.body.items).toEqual([])
    const own = await api(url, 'get', '/trims?unit=L-1', other)
    expect(own.body.items).toHaveLength(1)
    const hidden = await api(url, 'get', `/trims/${mine.id}`, station)
    const missing = await api(url, 'get', '/trims/01a230b2-a46d-7315-89af-a51980fdfb2a', station)
    expect(hidden.status).toBe(404)
    const { instance: _, ...shown } = hidden.body
    const { instance: __, ...same } = missing.body
    expect(shown).toEqual(same)
  })
})

it('records the same for an engineer in person, without a station', async () => {
  const reply = await api(url, 'post', '/trims', { ...engineer, key: newKey() }).send(
    trimBody({ unit: 'P-1' }),
  )
  expect(reply.status).toBe(201)
  expect(reply.body).toMatchObject({ station: null, by: { kind: 'person', role: 'engineer' } })
})

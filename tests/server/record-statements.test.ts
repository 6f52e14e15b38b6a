import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api, post } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody } from '../support/server-factories.ts'
import type { Harness } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }
let engineer: { cookie: string }
let operator: { cookie: string }
let currentOf: Scene['currentOf']

beforeAll(async () => {
  ;({ harness, url, station, engineer, operator, currentOf } = await serverScene())
})
afterAll(() => harness.close())

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
    const seen = async () => (await api(url, 'get', `/trims/${suspect.id}`, engineer)).body.notices
    expect(await seen()).toEqual([])
    const again = { kind: 'override', design: 'U18', unit: 'W-2', follows: suspect.id, reason }
    const second = await post(url, engineer, again)
    expect(await currentOf('W-2')).toMatchObject({ codes: suspect.result.trim.codes, record: suspect.id })
    expect(await seen()).toMatchObject([{ code: 'overridden', record: second.id }])
  })

  it('is for engineers', async () => {
    const record = await post(url, station, trimBody({ unit: 'W-3' }))
    expect(await post(url, operator, withdraw('W-3', record.id), 403)).toMatchObject({ code: 'forbidden' })
    expect(await post(url, station, withdraw('W-3', record.id), 403)).toMatchObject({
      code: 'override-needs-a-person',
    })
  })
})

import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api, post } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import { addDesign, type Harness } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }
let other: { token: string }
let engineer: { cookie: string }

beforeAll(async () => {
  ;({ harness, url, station, other, engineer } = await serverScene())
})
afterAll(() => harness.close())

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
    const points = pointsOf({ gainPpm: -203 }).map((point) => ({ ...point, readAt: '2025-01-01T00:00:00Z' }))
    const read = await post(url, station, trimBody({ ...fresh, unit: 'N-5-read', points }))
    expect(read.notices).toMatchObject([{ code: 'revision-withdrawn' }])
    const known = await post(url, station, trimBody({ design: 'OLD', unit: 'N-4', applied: 'neutral' }))
    expect(known.notices).toMatchObject([{ code: 'revision-withdrawn' }])
    const claimed = { solver: '1.0.0', codes: null, at: '2026-01-01T00:00:00Z' }
    await post(url, station, trimBody({ design: 'OLD', unit: 'N-6', claimed }))
  })
})

describe('the list', () => {
  it('goes through all records newest first, page by page, and filters', async () => {
    await post(url, station, trimBody({ unit: 'V-1' }))
    for (const gainPpm of [0.1, 50]) {
      await post(url, station, trimBody({ unit: 'V-1', kind: 'verify', points: pointsOf({ gainPpm }) }))
    }
    const seen: { id: string; recordedAt: string }[] = []
    let after: string | null = null
    do {
      const query: string = after === null ? '' : `&after=${encodeURIComponent(after)}`
      const page = await api(url, 'get', `/trims?limit=3${query}`, engineer)
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

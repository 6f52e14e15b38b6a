import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { LotBoards } from '../../server/commands/lots/board.ts'
import { findLots } from '../../server/commands/lots/find-lot.ts'
import { lotRecordedNames } from '../../server/db/migrations/003-lots.ts'
import { sha256 } from '../../server/ledger/crypto.ts'
import type { LotDetail, LotUnit } from '../../shared/contract/lots.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { type As, api, post } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody } from '../support/server-factories.ts'
import { addDesign, addToken, listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
let reader: As
beforeAll(async () => {
  scene = await serverScene()
  reader = await addToken(scene.harness, ['trims:read-all', 'designs:read'])
})
afterAll(() => scene.harness.close())

const at = (lot: string, rest = '') => `/designs/U18/lots/${lot}${rest}`
const get = async (path: string, as: As = scene.engineer) => api(scene.url, 'get', path, as)
const send = async (path: string, body: object, as: As = scene.engineer) =>
  api(scene.url, 'post', path, as).send(body)
const open = async (key: string, expected?: string[], design = 'U18') => {
  const reply = await send('/lots', { design, key, ...(expected ? { expected } : {}) }, scene.station)
  expect(reply.status, JSON.stringify(reply.body)).toBe(201)
  return reply.body as LotDetail
}
const trim = (lot: string, unit: string, change: object = {}, as: As = scene.station) =>
  post(scene.url, as, trimBody({ lot, unit, ...change }))
const outOfReach = { points: pointsOf({ gainPpm: -2000 }) }
const detailOf = async (lot: string) => (await get(at(lot))).body as LotDetail
const unitsOf = async (lot: string) => (await get(at(lot, '/units'))).body.items as LotUnit[]
const signOff = async (lot: string, body: object = {}, as: As = scene.engineer) => {
  const { etag } = await detailOf(lot)
  return api(scene.url, 'post', at(lot, '/sign-off'), { ...as, headers: { 'If-Match': etag } }).send(body)
}
const decided = 'scrapped, wrong resistor R12'

/** The body of a leaf, whose hash is the one said and which the ledger has given a place. */
async function checkLeafOf(hash: string) {
  await scene.harness.sequencer.drain()
  const [leaf] = await scene.harness.database.sql.rows<{ at: Date; body: Buffer; idx: number }>(
    'SELECT l.at, l.body, e.idx FROM ledger_leaves l JOIN ledger_entries e ON e.leaf_id = l.id WHERE l.hash = ?',
    [Buffer.from(hash, 'hex')],
  )
  const bytes = leafBytes('sign-off', leaf!.at.toISOString(), leaf!.body)
  expect(Buffer.from(leafHash(sha256, bytes)).toString('hex')).toBe(hash)
  return JSON.parse(leaf!.body.toString('utf8'))
}

describe('opening and closing', () => {
  it('opens a lot of the released revision; the same again changes nothing; an auditor opens none', async () => {
    const lot = await open('L-1', ['a', 'b'])
    expect(lot).toMatchObject({
      design: 'U18',
      revision: 1,
      state: 'open',
      openedBy: 'Test token',
      expected: 2,
    })
    expect(lot.counts).toMatchObject({ units: 0, missing: 2, share: null })
    expect(await open('L-1', ['b'])).toMatchObject({ expected: 2, etag: lot.etag })
    expect((await get('/lots?design=U18&key=L-1')).body.items).toHaveLength(1)
    for (const design of ['NONE', 'U18']) {
      const body = { design, key: 'L-2', revision: 7 }
      expect((await send('/lots', body)).status).toBe(design === 'NONE' ? 404 : 422)
    }
  })

  it('takes serials as they are, up to its bound, and names the bad one', async () => {
    const odd = ['031', '31', 'é', '"quoted"', '=1+1', '🙂']
    const lot = await open('ODD', odd)
    expect(lot.expected).toBe(odd.length)
    const missing = await get(at('ODD', '/missing?limit=4'))
    expect(missing.body.items).toHaveLength(4)
    const rest = await get(at('ODD', `/missing?after=${encodeURIComponent(missing.body.next)}`))
    expect(new Set([...missing.body.items, ...rest.body.items])).toEqual(new Set(odd))
    expect(rest.body.items).toHaveLength(2)
    const bad = await send(at('ODD', '/expected'), { serials: ['fine', ' not'] })
    expect(bad.status).toBe(422)
    expect(bad.body.errors[0].path).toBe('/serials/1')
    const most = Array.from({ length: 20_000 }, (_, i) => `m${i}`)
    const full = await send(at('ODD', '/expected'), { serials: most })
    expect(full.body).toMatchObject({ status: 422, code: 'lot-expected-full' })
    expect((await detailOf('ODD')).expected).toBe(odd.length)
  })

  it('refuses a lot of a withdrawn revision, and a closed lot every further record', async () => {
    await open('SHUT')
    await trim('SHUT', 'shut-1')
    expect((await send(at('SHUT', '/close'), {}, scene.operator)).body.state).toBe('closed')
    expect((await send(at('SHUT', '/close'), {})).body).toMatchObject({
      state: 'closed',
      closedBy: 'Test operator',
    })
    const late = await post(scene.url, scene.station, trimBody({ lot: 'SHUT', unit: 'shut-2' }), 422)
    expect(late).toMatchObject({
      code: 'lot-closed',
      errors: [{ path: '/lot', message: 'The lot is closed.' }],
    })
    expect(late.detail).toMatch(/Record under an open lot, or without one/)
    const again = await send('/lots', { design: 'U18', key: 'SHUT' })
    expect(again.body).toMatchObject({ status: 409, code: 'lot-state' })
    expect((await send(at('SHUT', '/expected'), { serials: ['x'] })).body.code).toBe('lot-state')
    expect((await get(at('NONE'))).status).toBe(404)
  })
})

describe('a lot of a withdrawn revision', () => {
  it('is not opened; an open one takes no fresh unit, and one that it knows with a notice', async () => {
    await addDesign(scene.harness, 'GONE')
    const lot = { design: 'GONE', key: 'G-1' }
    expect((await send('/lots', lot)).status).toBe(201)
    await trim('G-1', 'g-1', { design: 'GONE' })
    const as = { ...scene.engineer, headers: { 'If-Match': '*' } }
    const path = '/designs/GONE/revisions/1/withdrawal'
    const withdrawn = await api(scene.url, 'post', path, as).send({ reason: 'wrong reference fitted' })
    expect(withdrawn.body.state, JSON.stringify(withdrawn.body)).toBe('withdrawn')
    const fresh = trimBody({ design: 'GONE', lot: 'G-1', unit: 'g-2' })
    expect(await post(scene.url, scene.station, fresh, 422)).toMatchObject({ code: 'revision-withdrawn' })
    const again = await trim('G-1', 'g-1', { design: 'GONE', applied: 'neutral' })
    expect(again.notices).toMatchObject([{ code: 'revision-withdrawn' }])
    expect((await send('/lots', { ...lot, key: 'G-2', revision: 1 })).body.code).toBe('revision-withdrawn')
    const none = await send('/lots', { ...lot, key: 'G-3' })
    expect(none.body).toMatchObject({ code: 'revision-not-released', status: 422 })
    expect((await get('/designs/GONE/lots/G-1')).body).toMatchObject({ revisionState: 'withdrawn' })
  })
})

describe('yield', () => {
  it('counts units by their worst channel, withdrawn records for nothing, overrides as accepted', async () => {
    await open('Y', ['y-ok', 'y-later', 'y-gone'])
    await trim('Y', 'y-ok')
    const first = await trim('Y', 'y-later')
    const applied = first.result.trim.codes
    await trim('Y', 'y-later', { follows: 'last', applied, points: pointsOf({ gainPpm: 0.1 }) })
    await trim('Y', 'y-out', outOfReach)
    const suspect = await trim('Y', 'y-suspect', { points: suspectPoints() })
    const gone = await trim('Y', 'y-gone')
    let { counts } = await detailOf('Y')
    expect(counts).toMatchObject({ units: 5, good: 3, undecided: 2, missing: 0, share: 0.6 })
    expect(counts.byStanding).toMatchObject({ 'ok-first': 2, 'ok-later': 1, suspect: 1, 'out-of-reach': 1 })
    const say = (kind: string, of: { id: string; unit: string }) =>
      post(scene.url, scene.engineer, {
        kind,
        design: 'U18',
        unit: of.unit,
        follows: of.id,
        reason: 'looked at the meter log',
      })
    const override = await say('override', suspect)
    await say('withdraw', gone)
    counts = (await detailOf('Y')).counts
    expect(counts).toMatchObject({ units: 4, good: 3, undecided: 1, missing: 1 })
    expect(counts.byStanding).toMatchObject({ overridden: 1, suspect: 0 })
    expect((await get(at('Y', '/missing'))).body.items).toEqual(['y-gone'])
    await say('withdraw', override)
    expect((await detailOf('Y')).counts.byStanding).toMatchObject({ overridden: 0, suspect: 1 })
  })

  it('judges by the verification after the last trim: fail is not good, one pass more is', async () => {
    await open('V')
    const { result } = await trim('V', 'v-1')
    const check = (gainPpm: number) =>
      post(scene.url, scene.station, {
        kind: 'verify',
        design: 'U18',
        lot: 'V',
        unit: 'v-1',
        points: pointsOf({ gainPpm }),
      })
    await check(300)
    const [failed] = await unitsOf('V')
    expect(failed).toMatchObject({ standing: 'fail', places: [{ left: { outcome: 'fail' } }] })
    expect(failed?.places[0]?.attention).toMatchObject({ verdict: 'fail' })
    await trim('V', 'v-1', { follows: 'last', applied: result.trim.codes, points: pointsOf({ gainPpm: 10 }) })
    expect(await unitsOf('V')).toMatchObject([{ standing: 'ok-later', places: [{ left: null, pass: 2 }] }])
    await check(0)
    expect(await unitsOf('V')).toMatchObject([
      { standing: 'ok-later', places: [{ left: { outcome: 'pass' } }] },
    ])
  })

  it('calls a unit incomplete that lacks a channel or range which others of the lot have', async () => {
    await open('C', undefined, 'TWO')
    const place = (unit: string, channel: string) => trim('C', unit, { design: 'TWO', channel, range: 'u10' })
    await place('c-1', 'a')
    await place('c-1', 'b')
    await place('c-2', 'a')
    const { items } = (await get('/designs/TWO/lots/C/units')).body
    expect(items.map(({ unit, standing }: LotUnit) => [unit, standing])).toEqual([
      ['c-1', 'ok-first'],
      ['c-2', 'incomplete'],
    ])
    expect((await get('/designs/TWO/lots/C')).body.counts).toMatchObject({ units: 2, good: 1, undecided: 1 })
  })

  it('leaves reference units out, and only an engineer says which', async () => {
    await open('R')
    await trim('R', 'ref-1', outOfReach)
    await trim('R', 'r-1')
    const mark = (as: As, unit = 'ref-1', reference = true) =>
      send('/designs/U18/references', { unit, reference }, as)
    expect((await mark(scene.operator)).status).toBe(403)
    expect((await mark(scene.station)).status).toBe(403)
    expect((await mark(scene.engineer, 'nobody')).status).toBe(404)
    expect((await mark(scene.engineer)).status).toBe(200)
    const lot = await detailOf('R')
    expect(lot.counts).toMatchObject({ units: 1, good: 1, references: 1, undecided: 0 })
    expect(lot.references).toEqual(['ref-1'])
    const counts = (await get(at('R'), scene.station)).body
    expect(counts).toMatchObject({ references: [], counts: { references: 1 } })
    await mark(scene.engineer, 'ref-1', false)
    expect((await detailOf('R')).counts).toMatchObject({ units: 2, good: 1, references: 0 })
  })
})

describe('units of a lot', () => {
  it('come in pages, with what needs a look; only what changed comes again', async () => {
    await open('P')
    for (let i = 0; i < 7; i++) await trim('P', `p-${i}`, i === 3 ? outOfReach : {})
    const seen: LotUnit[] = []
    let after: string | null = null
    let newest = 0
    do {
      const path = at('P', `/units?limit=3${after === null ? '' : `&after=${after}`}`)
      const page = (await get(path)).body as { items: LotUnit[]; next: string | null; newest: number }
      seen.push(...page.items)
      after = page.next
      newest = page.newest
    } while (after !== null)
    expect(seen.map(({ unit }) => unit)).toEqual(Array.from({ length: 7 }, (_, i) => `p-${i}`))
    const { found, codes, attention } = seen[3]!.places[0]!
    expect(found?.gainErrorPpm).toBeCloseTo(-2000, 6)
    expect(codes).toBeNull()
    expect(attention?.reachUsed.gain).toBeGreaterThan(2)
    expect(seen[0]!.places[0]!.codes).toMatchObject({ gain: expect.any(Number), number: expect.any(Number) })
    const quiet = (await get(at('P', `/units?since=${newest}`))).body
    expect(quiet).toMatchObject({ items: [], newest, records: 7 })
    await trim('P', 'p-3', { applied: 'neutral' })
    const changed = (await get(at('P', `/units?since=${newest}`))).body
    expect(changed.items).toMatchObject([{ unit: 'p-3', standing: 'ok-first', records: 2 }])
    expect(changed.records).toBe(8)
  })

  it('are for whoever reads all; a token for another design finds nothing', async () => {
    expect((await get(at('P', '/units'), scene.station)).status).toBe(403)
    expect((await get(at('P'), scene.station)).status).toBe(200)
    expect((await get(at('P', '/missing'), scene.station)).status).toBe(403)
    for (const path of ['/units', '/missing']) expect((await get(at('P', path), reader)).status).toBe(200)
    const narrow = await addToken(scene.harness, ['trims:read-all'], null, { designs: ['TWO'] })
    for (const path of [at('P'), at('P', '/units'), at('P', '/missing'), '/designs/U18/stations']) {
      expect((await get(path, narrow)).status, path).toBe(404)
    }
    expect((await get('/lots', narrow)).body.items.every(({ design }: LotDetail) => design === 'TWO')).toBe(
      true,
    )
  })

  it('compares stations by month: reference units apart, nothing suspect or withdrawn', async () => {
    await trim('P', 'sb-1', { points: pointsOf({ gainPpm: -100 }) }, scene.other)
    const { items } = (await get('/designs/U18/stations')).body
    const b = items.filter(({ station }: { station: string }) => station === 'Station B')
    expect(b).toMatchObject([{ unit: null, n: 1, gainS: null }])
    expect(b[0].gainMeanPpm).toBeCloseTo(-100, 6)
    expect((await get('/designs/U18/stations?to=2001-01-01T00:00:00Z')).body.items).toEqual([])
  })
})

describe('what is kept of a lot in memory', () => {
  it('is the same as read afresh, whatever comes in between and however many ask (20 rounds)', async () => {
    await open('KEPT')
    const second = await listen(scene.harness.deps)
    for (let round = 0; round < 20; round++) {
      const change = round % 3 === 0 ? outOfReach : {}
      await Promise.all([
        trim('KEPT', `k-${round % 7}`, { applied: 'neutral', ...change }),
        ...[scene.url, second.url].map((url) => api(url, 'get', at('KEPT'), scene.engineer)),
      ])
      const seen = await Promise.all(
        [scene.url, scene.url, second.url].map((url) => api(url, 'get', at('KEPT'), scene.engineer)),
      )
      const fresh = await listen(scene.harness.deps)
      const { body } = await api(fresh.url, 'get', at('KEPT'), scene.engineer)
      await fresh.stop()
      expect(body.records).toBe(round + 1)
      for (const one of seen) expect(one.body, `round ${round}`).toEqual(body)
    }
    await second.stop()
  })
})

describe('what a list and a server keep', () => {
  const lots = (...keys: string[]) => findLots(scene.harness.database.sql, 'l.lot_key IN (?)', [keys])

  it('has for lists no more of a sign-off than its line', async () => {
    await open('LINE')
    await trim('LINE', 'line-1')
    await signOff('LINE')
    const rows = vi.spyOn(scene.harness.database.sql, 'rows')
    const { items } = (await get('/lots?key=LINE')).body
    expect(items[0].signedOff).toMatchObject({ by: 'Test engineer', note: null })
    const read = (await Promise.all(rows.mock.results.map(({ value }) => value))).flat() as object[]
    rows.mockRestore()
    expect(read.length).toBeGreaterThan(0)
    expect(read.flatMap((row) => Object.keys(row))).not.toContain('signOff')
  })

  it('drops the board used least recently by the places it holds, not by its units alone', async () => {
    const { sql } = scene.harness.database
    // One unit each with two places: four of size three, where units alone would count four.
    for (const key of ['K-1', 'K-2', 'K-3', 'K-4']) {
      await open(key, undefined, 'TWO')
      for (const channel of ['a', 'b']) await trim(key, `u-${key}`, { design: 'TWO', channel, range: 'u10' })
    }
    const heads = await lots('K-1', 'K-2', 'K-3', 'K-4')
    const boards = new LotBoards(7)
    for (const head of heads) await boards.read(sql, head)
    expect(heads.map((head) => boards.isFresh(head))).toEqual([false, false, true, true])
  })
})

describe('sign-off', () => {
  it('needs an engineer, an up-to-date look, and a decision on every unit that is not right', async () => {
    await open('S', ['s-1', 's-missing'])
    await trim('S', 's-1')
    await trim('S', 's-2', outOfReach)
    expect((await signOff('S', {}, scene.operator)).status).toBe(403)
    expect((await send(at('S', '/sign-off'), {})).status).toBe(428)
    const undecided = await signOff('S')
    expect(undecided.body).toMatchObject({ status: 422, code: 'lot-undecided', facts: { undecided: 2 } })
    expect(undecided.body.detail).toBe(
      'Unit s-2 is out of reach and undecided, and 1 more. Decide, then sign off.',
    )
    const short = await signOff('S', { leaveOut: [{ unit: 's-2', reason: 'no' }] })
    expect(short.body).toMatchObject({ code: 'reason-required', errors: [{ path: '/leaveOut/0/reason' }] })
    const stranger = await signOff('S', { leaveOut: [{ unit: 's-9', reason: decided }] })
    expect(stranger.body.code).toBe('lot-unit-unknown')
    const { etag } = await detailOf('S')
    await trim('S', 's-3')
    const stale = { ...scene.engineer, headers: { 'If-Match': etag } }
    const late = await api(scene.url, 'post', at('S', '/sign-off'), stale).send({ rest: { reason: decided } })
    expect(late.body).toMatchObject({ status: 412, code: 'precondition-failed' })
  })

  it('is a leaf of the ledger that names what is in and what is out; the lot is closed by it', async () => {
    const leaveOut = [{ unit: 's-2', reason: decided }]
    const note = 'batch of "May" \\ é 🙂 <b>'
    const signed = await signOff('S', { note, leaveOut, rest: { reason: 'never delivered' } })
    expect(signed.status, JSON.stringify(signed.body)).toBe(200)
    expect(signed.body).toMatchObject({
      state: 'signed-off',
      signedOff: { by: 'Test engineer', note },
      signOff: {
        counts: { units: 3, good: 2 },
        leftOut: [
          { unit: 's-2', reason: decided },
          { unit: 's-missing', reason: 'never delivered' },
        ],
      },
    })
    const { signOff: made } = (await get(at('S'), scene.station)).body
    expect(made).toEqual({ ...signed.body.signOff, leftOut: [] })
    expect((await get(at('S'), reader)).body.signOff).toEqual(signed.body.signOff)
    const [listed] = (await get('/lots?key=S')).body.items
    expect(listed.signedOff).toEqual(signed.body.signedOff)
    const leaf = await checkLeafOf(signed.body.signOff.leaf)
    expect(leaf).toMatchObject({
      format: 'ogee.sign-off/1',
      lot: 'S',
      units: ['s-1', 's-3'],
      references: [],
      records: 3,
      signedBy: 'Test engineer',
    })
    expect((await signOff('S', { rest: { reason: decided } })).body.code).toBe('lot-state')
    expect((await send(at('S', '/close'), {})).body.code).toBe('lot-state')
    const late = await post(scene.url, scene.station, trimBody({ lot: 'S', unit: 's-4' }), 422)
    expect(late.code).toBe('lot-closed')
  })

  it('never lets a record slip in beside it, whoever is first (50 rounds)', async () => {
    for (let round = 0; round < 50; round++) {
      const lot = `RACE-${round}`
      await open(lot)
      await trim(lot, `race-${round}-0`)
      const { etag } = await detailOf(lot)
      const as = { ...scene.engineer, headers: { 'If-Match': etag } }
      const [signed, ...late] = await Promise.all([
        api(scene.url, 'post', at(lot, '/sign-off'), as).send({}),
        ...[1, 2, 3].map((i) =>
          api(scene.url, 'post', '/trims', { ...scene.station, key: `race-${round}-${i}` }).send(
            trimBody({ lot, unit: `race-${round}-${i}` }),
          ),
        ),
      ])
      const recorded = late.filter(({ status }) => status === 201).length
      const { records, signOff: made } = await detailOf(lot)
      expect(records).toBe(recorded + 1)
      if (signed!.status === 200) {
        expect(recorded, `round ${round}`).toBe(0)
        expect(made?.counts.units).toBe(1)
      } else expect(signed!.status).toBe(412)
    }
  })
})

describe('the list', () => {
  it('is newest first, in pages, by design and state, each with its yield', async () => {
    const first = (await get('/lots?design=U18&limit=2&state=signed-off')).body
    expect(first.items).toHaveLength(2)
    const second = (await get(`/lots?design=U18&limit=2&state=signed-off&after=${first.next}`)).body
    expect(second.items[0].key).not.toBe(first.items[1].key)
    const [lot] = (await get('/lots?key=Y')).body.items
    expect(lot.counts).toMatchObject({ units: 4, good: 2 })
    expect(Date.parse(lot.firstAt)).toBeLessThanOrEqual(Date.parse(lot.lastAt))
  })
})

describe('what is written once', () => {
  it.each(lotRecordedNames)('refuses to change %s, whoever asks', async (table) => {
    const root = await scene.harness.test.asRoot()
    for (const change of [`DELETE FROM ${table}`, `UPDATE ${table} SET lot_id = lot_id`]) {
      await expect(root.query(change)).rejects.toMatchObject({ errno: 1644, sqlState: '45000' })
      const denied = { parent: { errno: 1142 } }
      await expect(scene.harness.database.sql.run(change)).rejects.toMatchObject(denied)
    }
    await root.end()
  })

  it('refuses to open a closed lot again, in the database itself', async () => {
    const reopen = "UPDATE lots SET state = 'open' WHERE lot_key = 'S'"
    await expect(scene.harness.database.sql.run(reopen)).rejects.toThrow(/never goes back/)
  })
})

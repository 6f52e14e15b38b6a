import Papa from 'papaparse'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { createToken } from '../../server/commands/create-token.ts'
import { exportRecords } from '../../server/commands/history/export-records.ts'
import { listRecorders } from '../../server/commands/history/list-recorders.ts'
import { searchOf } from '../../server/commands/history/search.ts'
import { listRecords } from '../../server/commands/list-records.ts'
import { asOutage } from '../../server/db/failure.ts'
import { bounded } from '../../server/db/sql.ts'
import { transaction } from '../../server/db/transaction.ts'
import type { PersonPrincipal } from '../../server/http/principal.ts'
import type { RecordLine } from '../../shared/contract/record.ts'
import { fillHarness } from '../support/filled.ts'
import { runSeed, seededRandom } from '../support/random.ts'
import { api, post, signIn } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import { addPerson, addStation, addToken, type Harness, serverHarness } from '../support/server-harness.ts'

const seed = runSeed()
let harness: Harness
let auditor: { cookie: string }
/** Every record as the database holds it, newest first: what filters are compared with. */
let all: (RecordLine & { byId: string; stationId: string | null })[]

beforeAll(async () => {
  harness = await serverHarness()
  await fillHarness(harness, 2_500, 11)
  await addPerson(harness, 'auditor')
  auditor = { cookie: await signIn(harness.url, 'auditor@example.org') }
  const reader = { kind: 'person', id: 'x', name: 'x', role: 'auditor' } as PersonPrincipal
  const { items } = await listRecords(harness.database, { limit: 10_000 }, reader)
  const ids = await harness.database.sql.rows<{ id: string; byId: string; stationId: string | null }>(
    'SELECT id, by_id AS byId, station_id AS stationId FROM records',
  )
  const more = new Map(ids.map((row) => [row.id, row]))
  all = items.map((item) => ({ ...item, ...more.get(item.id)! }))
})
afterAll(() => harness.close())

const get = (path: string, as: object = auditor) => api(harness.url, 'get', path, as)

/** Follows the pages to the end. */
async function follow(query: URLSearchParams, limit: number, as: object = auditor): Promise<string[]> {
  const ids: string[] = []
  let after: string | null = null
  do {
    const page = new URLSearchParams({
      ...Object.fromEntries(query),
      limit: String(limit),
      ...(after ? { after } : {}),
    })
    const reply = await get(`/trims?${page}`, as)
    expect(reply.status, JSON.stringify(reply.body)).toBe(200)
    ids.push(...reply.body.items.map((item: RecordLine) => item.id))
    after = reply.body.next
  } while (after !== null)
  return ids
}

type Line = (typeof all)[number]
const parts = (serial: string) => {
  const [first, ...rest] = serial.split(/(?<=[-_./ ])/)
  return [first!, ...rest].map((_, i, list) => list.slice(i).join('')).slice(0, 4)
}

/** Said once more, plainly: what each filter means of one record. */
const meaning: Record<string, (line: Line, value: string) => boolean> = {
  unit: (line, value) => line.unit === value,
  serial: (line, value) => parts(line.unit).some((part) => part.startsWith(value)),
  lot: (line, value) => value.split(',').includes(line.lot ?? ''),
  design: (line, value) => value.split(',').includes(line.design),
  revision: (line, value) => line.revision === Number(value),
  station: (line, value) =>
    value.split(',').includes(line.station ?? '') || value.split(',').includes(line.stationId ?? ''),
  by: (line, value) => value.split(',').includes(line.byId),
  kind: (line, value) => value.split(',').includes(line.kind),
  verdict: (line, value) => value.split(',').includes(line.verdict ?? ''),
  attempt: (line, value) => (line.attempt ?? 0) >= Number(value),
  from: (line, value) => line.recordedAt >= value,
  to: (line, value) => line.recordedAt.slice(0, value.length) <= value,
}

describe(`every filter, alone and with others (seed ${seed})`, () => {
  const random = seededRandom(seed)
  const value: Record<string, (line: Line) => string> = {
    unit: (line) => line.unit,
    serial: (line) =>
      random.pick([line.unit.slice(0, 9), line.unit.slice(-3), line.unit.slice(-9, -4), 'DB']),
    lot: (line) => [line.lot, random.pick(all).lot, 'NONE'].filter(Boolean).join(','),
    design: (line) => line.design,
    revision: () => '1',
    station: (line) => line.stationId ?? 'Station A',
    by: (line) => `${line.byId},${random.pick(all).byId}`,
    kind: (line) => random.pick([line.kind, 'trim,withdraw']),
    verdict: (line) => `${line.verdict ?? 'ok'},fail`,
    attempt: () => random.pick(['2', '3', '9', '10', '40']),
    from: (line) => line.recordedAt.slice(0, 10),
    to: (line) => line.recordedAt.slice(0, 10),
  }

  it.each(Object.keys(value))('%s', async (name) => {
    for (let i = 0; i < 3; i++) await compare({ [name]: value[name]!(random.pick(all)) })
  })

  it('in 60 random companies, in pages of random length', async () => {
    let found = 0
    for (let i = 0; i < 60; i++) {
      const line = random.pick(all)
      const names = Object.keys(value).filter(() => random.next() < 0.3)
      found += await compare(Object.fromEntries(names.map((name) => [name, value[name]!(line)])))
    }
    expect(found, 'the companies find something').toBeGreaterThan(100)
  })

  async function compare(filters: Record<string, string>): Promise<number> {
    const query = new URLSearchParams(filters)
    const expected = all.filter((line) =>
      Object.entries(filters).every(([name, wanted]) => meaning[name]!(line, wanted)),
    )
    const about = `?${query}`
    expect(await follow(query, 40 + random.below(460)), about).toEqual(expected.map((line) => line.id))
    expect((await get(`/history/count?${query}`)).body, about).toEqual({
      count: expected.length,
      more: false,
    })
    return expected.length
  }
})

describe('what a caller may see', () => {
  it('bounds pages, counts, recorders and exports alike: a station its own, a design its own', async () => {
    const station = all.find((line) => line.station === 'Station B')!.stationId!
    const own = await addToken(harness, ['trims:read'], station)
    const mine = all.filter((line) => line.stationId === station).map((line) => line.id)
    expect(await follow(new URLSearchParams(), 500, own)).toEqual(mine)
    expect((await get('/history/count', own)).body.count).toBe(mine.length)
    expect((await get('/history/count?station=Station%20A', own)).body.count).toBe(0)
    expect((await get('/history/recorders', own)).body.items.map((item: { id: string }) => item.id)).toEqual([
      'demoB000',
    ])
    const lines = (await get('/history/export.ndjson', own).buffer().parse(asText)).body as string
    expect(
      lines
        .trim()
        .split('\n')
        .map((line) => JSON.parse(line).id),
    ).toEqual(mine)
    const narrow = await addToken(harness, ['trims:read-all'], null, { designs: ['DBC-16'] })
    const seen = all.filter((line) => line.design === 'DBC-16').map((line) => line.id)
    expect(await follow(new URLSearchParams(), 500, narrow)).toEqual(seen)
    expect((await get('/history/count?design=DBS-A', narrow)).body.count).toBe(0)
  })
})

describe('what it costs', () => {
  it('looks deeper where the first look tells nothing, and takes the way that leaves fewer', async () => {
    const counts: Record<number, object> = {
      1000: { n0: 1_000, n1: 1_000, n2: 1_000 },
      50000: { n0: 50_000, n1: 50_000, n2: 1_200 },
    }
    const asked: number[] = []
    const rows = async (statement: string) => {
      asked.push(Number(/LIMIT (\d+)/.exec(statement)?.[1]))
      return [counts[asked.at(-1)!]] as never
    }
    const sql = { ...harness.database.sql, rows }
    const everything = { station: 'all', designs: null } as const
    const filters = { kind: ['verify'], by: ['someone'], design: ['U18'] } as never
    expect(await searchOf(sql, filters, everything)).toMatchObject({ index: 'records_design' })
    expect(asked).toEqual([1_000, 50_000])
    // One station has fewer records than one kind, until the counts say otherwise.
    counts[50_000] = { n0: 50_000, n1: 50_000 }
    const own = { station: '01890a5d-ac96-774b-bcce-b302099a8057', designs: null }
    const verified = { kind: ['verify'], station: [own.station] } as never
    expect(await searchOf(sql, verified, own)).toMatchObject({ index: 'records_station' })
  })

  it('has a bound in the database for every reading of a page, and what is cut off is an outage', async () => {
    const rows = vi.spyOn(harness.database.sql, 'rows')
    const fromRecords = () =>
      rows.mock.calls.map(([text]) => text).filter((text) => /FROM records/.test(text))
    for (const path of [
      '/trims?kind=trim&design=DBS-A',
      '/trims?serial=DB',
      '/history/count?kind=trim',
      '/history/recorders',
      '/designs/DBS-A/stations',
    ]) {
      rows.mockClear()
      expect((await get(path)).status, path).toBe(200)
      expect(fromRecords().length, path).toBeGreaterThan(0)
      for (const text of fromRecords()) expect(text).toMatch(/^SET STATEMENT max_statement_time = [\d.]+ FOR/)
    }
    rows.mockRestore()
    const slow = 'SELECT COUNT(*) AS n FROM records a, records b, records c, records d'
    const cut = bounded(harness.database.sql).rows(slow)
    const error = await cut.then(
      () => undefined,
      (failed: unknown) => failed,
    )
    expect(asOutage(error)).toMatchObject({ code: 'database-unavailable' })
  })

  it('for the recorders of one station does not walk through what others recorded', async () => {
    const stationOf = (name: string) => all.find((line) => line.station === name)!.stationId!
    const script = {
      name: 'Station A script',
      station: stationOf('Station A'),
      scopes: ['trims:read' as const],
    }
    const parts = { id: 'demoA000', secret: 'abcdefghijklmnopqrstuvwxyz0123456789ABCDEFG' }
    await createToken(harness.deps, { ...script, designs: null, days: 1 }, 'tests', parts)
    const station = { id: stationOf('Station B'), name: 'Station B' }
    const principal = { kind: 'token', scopes: ['trims:read'], designs: null, station } as never
    const read = await transaction(harness.database, async (sql) => {
      const steps = async () => {
        const counts = await sql.rows<{ Value: string }>("SHOW SESSION STATUS LIKE 'Handler_read_%'")
        return counts.reduce((sum, { Value }) => sum + Number(Value), 0)
      }
      const before = await steps()
      const found = await listRecorders(sql, principal)
      return { names: found.map(({ id }) => id), steps: (await steps()) - before }
    })
    expect(read.names).toEqual(['demoB000'])
    expect(read.steps).toBeLessThan(200)
  })
})

describe('export', () => {
  it('gives exactly what is filtered, as lines that a list would show', async () => {
    const query = 'verdict=suspect,out-of-reach,fail'
    const text = (await get(`/history/export.ndjson?${query}`).buffer().parse(asText)).body as string
    const expected = all.filter((line) => ['suspect', 'out-of-reach', 'fail'].includes(line.verdict ?? ''))
    expect(expected.length).toBeGreaterThan(20)
    expect(
      text
        .trim()
        .split('\n')
        .map((line) => JSON.parse(line)),
    ).toEqual(expected.map(({ byId: _, stationId: __, ...line }) => line))
  })

  it('of nothing is no line, and in CSV the head alone', async () => {
    const of = async (kind: string) =>
      (await get(`/history/export.${kind}?unit=NONE`).buffer().parse(asText)).body as string
    expect(await of('ndjson')).toBe('')
    expect(await of('csv')).toMatch(/^number,recorded_at,.*,finding\n$/)
  })

  it('reads the next page only when the last one was taken, so that a slow reader holds one in memory', async () => {
    const pages = vi.spyOn(harness.database.sql, 'rows')
    const reader = { kind: 'person', id: 'x', name: 'x', role: 'auditor' } as PersonPrincipal
    const read = exportRecords(harness.database, {}, reader)
    const first = await read.next()
    expect(first.value).toHaveLength(500)
    expect(pages).toHaveBeenCalledTimes(1)
    await read.next()
    expect(pages).toHaveBeenCalledTimes(2)
    await read.return(undefined)
    expect((await read.next()).done).toBe(true)
    expect(pages).toHaveBeenCalledTimes(2)
    pages.mockRestore()
  })

  it('as CSV: every number the same double, over several pages', async () => {
    const reply = await get('/history/export.csv').buffer().parse(asText)
    expect(reply.headers['content-type']).toBe('text/csv; charset=utf-8')
    expect(reply.headers['content-disposition']).toMatch(
      /^attachment; filename="ogee records \d{4}-\d\d-\d\d\.csv"; /,
    )
    const { data } = Papa.parse<Record<string, string>>(reply.body as string, {
      header: true,
      skipEmptyLines: true,
    })
    const numbers = {
      gain_error_ppm: 'gainErrorPpm',
      offset_error_v: 'offsetErrorV',
      worst_lsb: 'worstLsb',
    } as const
    expect(data).toHaveLength(all.length)
    for (const [i, row] of data.entries()) {
      for (const [column, name] of Object.entries(numbers)) {
        const value = all[i]![name as keyof RecordLine] as number | null
        expect(row[column] === '' ? null : Number(row[column])).toBe(value === null ? null : value)
      }
      expect([row.unit, row.record]).toEqual([all[i]!.unit, all[i]!.id])
    }
  })
})

describe('attempt', () => {
  it('counts the measurements of a kind on a day, and is no part of the record itself', async () => {
    const station = await addStation(harness, 'Bench of attempts')
    const token = await addToken(harness, ['trims:write', 'trims:read'], station.id)
    const body = { design: 'DBS-A', unit: 'AGAIN-1', channel: '1', applied: 'neutral' }
    const points = pointsOf({ gainPpm: -203 })
    for (let i = 0; i < 3; i++) await post(harness.url, token, trimBody({ ...body, points }))
    const last = await post(harness.url, token, trimBody({ ...body, kind: 'verify', points }))
    harness.clock.shiftMs = 86_400_000
    await post(harness.url, token, trimBody({ ...body, points }))
    harness.clock.shiftMs = 0
    const { items } = (await get('/trims?unit=AGAIN-1', token)).body
    expect(items.map((item: RecordLine) => [item.kind, item.attempt])).toEqual([
      ['trim', 1],
      ['verify', 1],
      ['trim', 3],
      ['trim', 2],
      ['trim', 1],
    ])
    expect(last).not.toHaveProperty('attempt')
    expect((await get('/trims?unit=AGAIN-1&attempt=2', token)).body.items).toHaveLength(2)
  })
})

/** supertest parses by content type; this keeps the text. */
function asText(response: unknown, done: (error: Error | null, body: string) => void) {
  const chunks: Buffer[] = []
  const stream = response as NodeJS.ReadableStream
  stream.on('data', (chunk: Buffer) => chunks.push(Buffer.from(chunk)))
  stream.on('end', () => done(null, Buffer.concat(chunks).toString('utf8')))
}

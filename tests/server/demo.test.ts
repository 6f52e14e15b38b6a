import { mkdtempSync, readFileSync, rmSync, statSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { loadDemo } from '../../server/demo/load-demo.ts'
import { demoLots } from '../../server/demo/scenario.ts'
import { calibrationState } from '../../shared/calibration.ts'
import { api, signIn } from '../support/server-client.ts'
import { addPerson, type Harness, serverHarness } from '../support/server-harness.ts'

let harness: Harness
let dir: string
const said: string[] = []
type Accounts = { people: { email: string; role: string; password: string }[]; token: string }
const accounts = () => JSON.parse(readFileSync(join(dir, 'demo-accounts.json'), 'utf8')) as Accounts

beforeAll(async () => {
  harness = await serverHarness()
  dir = mkdtempSync(join(tmpdir(), 'ogee-demo-'))
  await killedStarts()
  await loadDemo(harness.deps, dir, (line) => said.push(line))
})
afterAll(async () => {
  rmSync(dir, { recursive: true, force: true })
  await harness.close()
})

/** Starts that die at different places: after some number of statements the database is gone for them. */
async function killedStarts() {
  for (const after of [2, 6, 13, 30]) {
    let left = after
    const dying = new Proxy(harness.database.sequelize, {
      get(target, name, receiver) {
        if (name === 'transaction' && left-- <= 0) throw new Error('killed')
        return Reflect.get(target, name, receiver) as unknown
      },
    })
    const database = { ...harness.database, sequelize: dying }
    await loadDemo({ ...harness.deps, database }, dir, () => undefined).catch((error: Error) =>
      expect(error.message).toBe('killed'),
    )
  }
}

const rows = <Row extends object>(statement: string) => harness.database.sql.rows<Row>(statement)

describe('demo data', () => {
  it('are whole and single, although four starts before were killed', async () => {
    const [count] = await rows<Record<string, number>>(
      `SELECT (SELECT COUNT(*) FROM people) AS people, (SELECT COUNT(*) FROM stations) AS stations,
        (SELECT COUNT(*) FROM tokens) AS tokens, (SELECT COUNT(*) FROM designs) AS designs,
        (SELECT COUNT(*) FROM lots) AS lots, (SELECT COUNT(DISTINCT unit) FROM records) AS units,
        (SELECT COUNT(*) FROM ledger_leaves WHERE kind = 'record') - (SELECT COUNT(*) FROM records) AS loose`,
    )
    expect(count).toEqual({ people: 4, stations: 2, tokens: 1, designs: 2, lots: 40, units: 107, loose: 0 })
  })

  it('have two instruments, calibrated each year, one due soon, and records that keep what was true then', async () => {
    const { items } = (await api(harness.url, 'get', '/instruments', { token: accounts().token })).body
    const state = items.map((item: { id: string; dueOn: string }) => [
      item.id,
      calibrationState(item.dueOn, Date.now()),
    ])
    expect(state).toEqual([
      ['DMM-07', 'good'],
      ['DMM-12', 'soon'],
    ])
    const bodies = await rows<{ body: Buffer }>("SELECT body FROM ledger_leaves WHERE kind = 'record'")
    const kept = bodies.map(({ body }) => JSON.parse(body.toString('utf8')))
    expect(new Set(kept.map(({ instrument }) => instrument.dueOn)).size).toBeGreaterThanOrEqual(4)
    for (const { instrument, measuredAt } of kept) {
      expect(measuredAt.slice(0, 10) >= instrument.calibratedOn).toBe(true)
      expect(measuredAt.slice(0, 10) <= instrument.dueOn).toBe(true)
    }
  })

  it('hold a finding on the lot with the wrong resistor, answered and still open', async () => {
    const lot = demoLots(new Date()).find((one) => one.wrongResistor)!
    const leaves = await rows<{ kind: string; body: Buffer }>(
      "SELECT kind, body FROM ledger_leaves WHERE kind IN ('finding', 'answer') ORDER BY id",
    )
    expect(leaves.map(({ kind }) => kind)).toEqual(['finding', 'answer'])
    expect(JSON.parse(leaves[0]!.body.toString('utf8')).subject).toEqual({
      kind: 'lot',
      design: lot.design,
      lot: lot.key,
    })
  })

  it('tell the scenario: two years, a lot out of reach, second passes, suspects, verifications', async () => {
    const verdicts = await rows<{ verdict: string; n: number }>(
      'SELECT verdict, COUNT(*) AS n FROM records GROUP BY verdict',
    )
    const of = new Map(verdicts.map((row) => [row.verdict, row.n]))
    for (const verdict of ['ok', 'out-of-reach', 'suspect', 'pass', 'fail'])
      expect(of.get(verdict) ?? 0, verdict).toBeGreaterThan(0)
    const outs = await rows<{ lot: string }>(
      "SELECT DISTINCT lot FROM records WHERE verdict = 'out-of-reach'",
    )
    expect(outs).toEqual([{ lot: demoLots(new Date()).find((lot) => lot.wrongResistor)!.key }])
    const [second] = await rows<{ n: number }>('SELECT COUNT(*) AS n FROM records WHERE pass = 2')
    expect(second!.n).toBeGreaterThan(5)
    const [span] = await rows<{ days: number }>(
      'SELECT DATEDIFF(MAX(recorded_at), MIN(recorded_at)) AS days FROM records',
    )
    expect(span!.days).toBeGreaterThan(680)
    const [late] = await rows<{ n: number }>(
      'SELECT COUNT(*) AS n FROM records WHERE recorded_at > UTC_TIMESTAMP(3)',
    )
    expect(late!.n).toBe(0)
  })

  it('show lots in every state, an expected unit that never came, and a reference unit at both stations', async () => {
    const states = await rows<{ state: string; n: number }>(
      'SELECT state, COUNT(*) AS n FROM lots GROUP BY state',
    )
    expect(Object.fromEntries(states.map(({ state, n }) => [state, n]))).toEqual({
      open: 1,
      closed: 2,
      'signed-off': 37,
    })
    const [signed] = await rows<{ n: number }>(
      "SELECT COUNT(*) AS n FROM ledger_leaves WHERE kind = 'sign-off'",
    )
    expect(signed!.n).toBe(37)
    const [open] = await rows<{ key: string; design: string }>(
      "SELECT l.lot_key AS `key`, d.design_key AS design FROM lots l JOIN designs d ON d.id = l.design_id WHERE state = 'open'",
    )
    const { token } = accounts()
    const lot = await api(harness.url, 'get', `/designs/${open!.design}/lots/${open!.key}`, { token })
    expect(lot.body).toMatchObject({ expected: 26, counts: { units: 24, missing: 2 } })
    const stations = await api(harness.url, 'get', `/designs/${open!.design}/stations`, { token })
    const reference = stations.body.items.filter(({ unit }: { unit: string | null }) => unit !== null)
    expect(new Set(reference.map(({ station }: { station: string }) => station)).size).toBe(2)
    const drift = (name: string) => {
      const own = reference.filter(({ station }: { station: string }) => station === name)
      return own.at(-1).gainMeanPpm - own[0].gainMeanPpm
    }
    expect(drift('Station B')).toBeGreaterThan(1)
    expect(Math.abs(drift('Station A'))).toBeLessThan(0.5)
  })

  it('give one person a role, random passwords and a working token, kept for the owner alone', async () => {
    const { people, token } = accounts()
    expect(people.map((person) => person.role)).toEqual(['administrator', 'engineer', 'operator', 'auditor'])
    expect(new Set(people.map((person) => person.password)).size).toBe(4)
    expect(statSync(join(dir, 'demo-accounts.json')).mode & 0o777).toBe(0o600)
    for (const { email, password } of people) await signIn(harness.url, email, password)
    const me = await api(harness.url, 'get', '/me', { token })
    expect(me.body.who.scopes).toEqual(expect.arrayContaining(['trims:write', 'trims:read', 'designs:read']))
    expect((await api(harness.url, 'get', '/trims?limit=1', { token })).body.items).toHaveLength(1)
    expect(said.join('\n')).toContain(token)
    expect(JSON.stringify(harness.log)).not.toContain(token)
  })

  it('are loaded once: another start changes nothing and says nothing', async () => {
    const before = said.length
    await loadDemo(harness.deps, dir, (line) => said.push(line))
    expect(said.length).toBe(before)
  })
})

it('leave an installation alone that has people of its own', async () => {
  const own = await serverHarness()
  await addPerson(own, 'engineer')
  await loadDemo(own.deps, dir, () => expect.unreachable('nothing is loaded'))
  expect(await own.database.sql.rows('SELECT id FROM stations')).toEqual([])
  await own.close()
})

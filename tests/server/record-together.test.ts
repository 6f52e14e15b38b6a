import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { recordTrims } from '../../server/commands/record-trims.ts'
import { jobOf } from '../../server/commands/recorder.ts'
import type { Job } from '../../server/commands/recording/job.ts'
import { recordNumbers } from '../../server/commands/recording/record-numbers.ts'
import type { TokenPrincipal } from '../../server/http/principal.ts'
import { recordRequest } from '../../shared/contract/record.ts'
import { newKey } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import { addDesign, addStation, type Harness, serverHarness } from '../support/server-harness.ts'

let harness: Harness
let principal: TokenPrincipal
let deps: Parameters<typeof recordTrims>[0]

beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  const station = await addStation(harness, 'Station A')
  principal = {
    kind: 'token',
    id: 'AAAAAAAA',
    name: 'Test',
    station,
    scopes: ['trims:write'],
    designs: null,
    expiresAt: new Date('2999-01-01'),
  }
  deps = { ...harness.deps, numbers: recordNumbers(harness.database) }
})
afterAll(() => harness.close())

function job(change: Record<string, unknown>, key = newKey()): Job {
  const body = trimBody(change)
  return jobOf({ principal, request: recordRequest.parse(body), rawBody: body, key })
}

const counts = async () => {
  const [row] = await harness.database.sql.rows<{
    records: number
    leaves: number
    keys: number
    units: number
  }>(
    `SELECT (SELECT COUNT(*) FROM records) AS records, (SELECT COUNT(*) FROM ledger_leaves WHERE kind = 'record') AS leaves,
      (SELECT COUNT(*) FROM idempotency_keys) AS \`keys\`, (SELECT COUNT(*) FROM units) AS units`,
  )
  return row!
}

describe('records that share a transaction', () => {
  it('of which one is bad: it is taken out, leaves nothing, and the rest go on', async () => {
    const before = await counts()
    const jobs = [
      job({ unit: 'A-1' }),
      job({ unit: 'A-2', lot: 'NONE' }),
      job({ unit: 'A-3' }),
      job({ unit: 'A-4', points: [{ code: 0, measured: 0 }] }),
      job({ unit: 'A-5' }),
    ]
    const outcomes = await recordTrims(deps, jobs)
    expect(outcomes.map((outcome) => (outcome.done ? 'done' : outcome.error))).toEqual([
      'done',
      expect.objectContaining({ code: 'lot-unknown' }),
      'done',
      expect.objectContaining({ code: 'too-few-codes' }),
      'done',
    ])
    const after = await counts()
    expect(after).toEqual({
      records: before.records + 3,
      leaves: before.leaves + 3,
      keys: before.keys + 3,
      units: before.units + 3,
    })
  })

  it('of one unit see each other in order', async () => {
    const first = job({ unit: 'B-1' })
    const [one] = await recordTrims(deps, [first])
    const applied = codesOf(one)
    const together = await recordTrims(deps, [
      job({ unit: 'B-1', applied, follows: 'last', points: pointsOf({ gainPpm: 1 }) }),
      job({ unit: 'B-1', kind: 'verify', points: pointsOf() }),
      job({ unit: 'B-1' }),
    ])
    expect(together.map((outcome) => outcome.done)).toEqual([true, true, false])
    const [trim, verify] = together.map((outcome) => (outcome.done ? JSON.parse(outcome.record.text) : null))
    expect(trim).toMatchObject({ pass: 2 })
    expect(verify).toMatchObject({ follows: trim.id, applied: trim.result.trim.codes, pass: 2 })
  })

  it('of which one is a replay and one reuses a key', async () => {
    const key = newKey()
    const [first] = await recordTrims(deps, [job({ unit: 'C-1' }, key)])
    const outcomes = await recordTrims(deps, [job({ unit: 'C-1' }, key), job({ unit: 'C-2' })])
    expect(outcomes).toMatchObject([
      { done: true, replayed: true },
      { done: true, replayed: false },
    ])
    expect(textOf(outcomes[0])).toBe(textOf(first))
    const [reused] = await recordTrims(deps, [job({ unit: 'C-3' }, key)])
    expect(reused).toMatchObject({ done: false, error: { code: 'idempotency-key-reused' } })
  })

  it('fail whole when the database refuses one row, and leave no leaf', async () => {
    const before = await counts()
    // A number that is taken makes the insert of the second record fail after its leaf went in.
    const [taken] = await harness.database.sql.rows<{ number: number }>(
      'SELECT MAX(number) AS number FROM records',
    )
    const clash = { take: async () => [900_001, taken!.number] }
    const outcomes = await recordTrims({ ...deps, numbers: clash }, [
      job({ unit: 'D-1' }),
      job({ unit: 'D-2' }),
    ])
    expect(outcomes.every((outcome) => !outcome.done)).toBe(true)
    expect(await counts()).toEqual(before)
    const [pending] = await harness.database.sql.rows<{ n: number }>(
      'SELECT COUNT(*) AS n FROM ledger_pending p LEFT JOIN ledger_leaves l ON l.id = p.leaf_id WHERE l.id IS NULL',
    )
    expect(pending!.n).toBe(0)
  })

  it('run again when they deadlock with another transaction', async () => {
    await recordTrims(deps, [job({ unit: 'E-1' }), job({ unit: 'E-2' })])
    const { sequelize } = harness.database
    const rival = await sequelize.transaction()
    const lock = (serial: string) =>
      sequelize.query('SELECT id FROM units WHERE serial = $1 FOR UPDATE', {
        bind: [serial],
        transaction: rival,
        plain: true,
      })
    await lock('E-2')
    const recording = recordTrims(deps, [
      job({ unit: 'E-1', applied: 'neutral' }),
      job({ unit: 'E-2', applied: 'neutral' }),
    ])
    await new Promise((resolve) => setTimeout(resolve, 150))
    // One of the two is chosen as the victim; whichever it is, the records are made once.
    await lock('E-1').catch(() => undefined)
    await rival.rollback().catch(() => undefined)
    expect((await recording).map((outcome) => outcome.done)).toEqual([true, true])
    const rows = await harness.database.sql.rows("SELECT id FROM records WHERE unit IN ('E-1', 'E-2')")
    expect(rows).toHaveLength(4)
  })
})

type Outcome = Awaited<ReturnType<typeof recordTrims>>[number] | undefined
const textOf = (outcome: Outcome) => (outcome?.done ? outcome.record.text : '')
const codesOf = (outcome: Outcome) =>
  JSON.parse(textOf(outcome)).result.trim.codes as { gain: number; offset: number }

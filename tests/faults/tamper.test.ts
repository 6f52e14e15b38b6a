import { setImmediate } from 'node:timers/promises'
import type { Connection } from 'mariadb'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { makeClient } from '../../cli/client.ts'
import { asText, crypto } from '../../cli/ledger/crypto.ts'
import { verifyAll } from '../../cli/ledger/verify-all.ts'
import { sequencePass } from '../../server/ledger/sequence.ts'
import { checkLedger } from '../../shared/ledger/check/check-ledger.ts'
import { serverSource } from '../../shared/ledger/check/server-source.ts'
import { memoryIo } from '../cli/support/memory-io.ts'
import { runSeed, seededRandom } from '../support/random.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody } from '../support/server-factories.ts'
import { addPerson, addToken, listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'
import {
  type Held,
  knowRecordColumns,
  type Table,
  type Tampering,
  tamperings,
  type World,
} from './tampering.ts'

/** R6: whatever the database's root does to what is recorded, `ledger check` with an older checkpoint finds and names it. */

const runs = Number(process.env.OGEE_TAMPERINGS ?? 500)
const leaves = 1_000
const seed = runSeed()
const tables: readonly Table[] = [
  'records',
  'ledger_leaves',
  'ledger_entries',
  'ledger_nodes',
  'ledger_checkpoints',
  'ledger_keys',
  'design_documents',
  'ledger_head',
  'findings',
  'finding_answers',
  'lot_sign_offs',
]

let scene: Scene
let served: Awaited<ReturnType<typeof listen>>
let root: Connection
let held: Held
let notes: { size: number; note: string }[]
const columns = new Map<Table, string>()

beforeAll(async () => {
  scene = await serverScene()
  await scene.harness.sequencer.stop()
  // What was tampered with breaks the form of replies, which is the point.
  served = await listen({ ...scene.harness.deps, checkReplies: false })
  root = await scene.harness.test.asRoot()
  await addStatements()
  await fillLedger()
  await rememberAll()
})
afterAll(async () => {
  await root.end()
  await served.stop()
  await scene.harness.close()
})

/** A lot that is signed off, a finding on it and one on a record, answered and closed. */
async function addStatements(): Promise<void> {
  const { url, engineer } = scene
  await addPerson(scene.harness, 'auditor')
  const auditor = { cookie: await signIn(url, 'auditor@example.org') }
  const sent = async (path: string, as: { cookie: string }, body: object) => {
    const more = { ...as, key: newKey(), headers: { 'If-Match': '*' } }
    const reply = await api(url, 'post', path, more).send(body)
    expect(reply.status, `${path} ${JSON.stringify(reply.body)}`).toBeLessThan(300)
    return reply.body as { id: string }
  }
  await sent('/lots', engineer, { design: 'U18', key: 'L1' })
  const { id } = await post(url, scene.station, trimBody({ unit: 'T-lot', lot: 'L1' }))
  const text = 'The note gives 30 min of warm-up; the procedure asks 45.'
  const finding = await sent('/findings', auditor, { subject: { kind: 'record', record: id }, text })
  await sent('/findings', auditor, { subject: { kind: 'lot', design: 'U18', lot: 'L1' }, text })
  await sent(`/findings/${finding.id}/answers`, engineer, { text: 'Readings show it had settled.' })
  await sent(`/findings/${finding.id}/closing`, auditor, { text: 'Accepted; the procedure changes.' })
  await sent('/designs/U18/lots/L1/close', engineer, {})
  await sent('/designs/U18/lots/L1/sign-off', engineer, { rest: { reason: 'Looked at and left out.' } })
}

/** A thousand leaves, most of them records, with a checkpoint after each fifty. */
async function fillLedger(): Promise<void> {
  const { database, deps } = scene.harness
  let clock = Date.now()
  const size = async () => {
    clock += 1_500
    await sequencePass(database, deps.signer, () => new Date(clock))
    const [head] = await database.sql.rows<{ size: number }>('SELECT size FROM ledger_head')
    return head!.size
  }
  for (let have = await size(), unit = 0; have < leaves; have = await size()) {
    const lines = Array.from({ length: Math.min(50, leaves - have) }, () => {
      const points =
        unit % 9 === 4 ? suspectPoints() : pointsOf({ gainPpm: -203 + (unit % 30), offsetV: 2e-6 })
      unit++
      return JSON.stringify({ key: newKey(), ...trimBody({ unit: `T-${unit}`, points }) })
    })
    const reply = await api(scene.url, 'post', '/batches', scene.station)
      .set('Content-Type', 'application/x-ndjson')
      .send(lines.join('\n'))
    expect(reply.status).toBe(200)
  }
}

async function rememberAll(): Promise<void> {
  await root.query('SET foreign_key_checks = 0, check_constraint_checks = 0')
  const triggers = await root.query<{ name: string }[]>(
    'SELECT TRIGGER_NAME AS name FROM information_schema.TRIGGERS WHERE TRIGGER_SCHEMA = DATABASE()',
  )
  for (const { name } of triggers) await root.query(`DROP TRIGGER ${name}`)
  for (const table of tables) {
    const found = await root.query<{ name: string }[]>(
      `SELECT COLUMN_NAME AS name FROM information_schema.COLUMNS
        WHERE TABLE_SCHEMA = DATABASE() AND TABLE_NAME = ? AND GENERATION_EXPRESSION IS NULL ORDER BY ORDINAL_POSITION`,
      [table],
    )
    columns.set(table, found.map(({ name }) => name).join(', '))
    await root.query(`CREATE TABLE kept_${table} AS SELECT ${columns.get(table)} FROM ${table}`)
  }
  knowRecordColumns(columns.get('records')!.split(', '))
  const entries = await root.query<{ idx: bigint; leafId: bigint; kind: string; record: string | null }[]>(
    `SELECT e.idx, e.leaf_id AS leafId, l.kind, r.id AS record FROM ledger_entries e
      JOIN ledger_leaves l ON l.id = e.leaf_id LEFT JOIN records r ON r.leaf_id = l.id ORDER BY e.idx`,
  )
  const signed = await root.query<{ number: bigint; size: bigint; note: string }[]>(
    'SELECT number, size, note FROM ledger_checkpoints WHERE size > 0 ORDER BY number',
  )
  const checkpoints = signed.map(({ number, size }) => ({ number: Number(number), size: Number(size) }))
  notes = signed.map(({ size, note }) => ({ size: Number(size), note }))
  held = {
    entries: entries.map((row) => ({ ...row, idx: Number(row.idx), leafId: Number(row.leafId) })),
    checkpoints,
  }
}

async function putBack({ touches }: Pick<Tampering, 'touches'>): Promise<void> {
  for (const table of touches) {
    await root.query(`DELETE FROM ${table}`)
    await root.query(
      `INSERT INTO ${table} (${columns.get(table)}) SELECT ${columns.get(table)} FROM kept_${table}`,
    )
  }
}

let token = ''
async function check(kept: readonly { size: number; note: string }[]) {
  token ||= (await addToken(scene.harness, ['ledger:read'])).token
  const client = makeClient({ url: served.url, token }, memoryIo())
  return checkLedger(serverSource(client), {
    sha256: crypto.sha256,
    asText,
    run: async (check) => check(crypto),
    key: scene.harness.deps.signer.key,
    kept: kept.map(({ size, note }) => ({ name: `the checkpoint over ${size}`, note })),
    verifyAll,
    onProgress: () => undefined,
    turn: setImmediate,
  })
}

test('negative control: nothing is found where nothing was done, nor where it is no business of the ledger', async () => {
  const report = await check(notes)
  expect(report).toMatchObject({ ok: true, found: 0, size: leaves, faults: [] })
  expect(report.records).toBeGreaterThan(900)
  expect(report.checkpoints).toBeGreaterThan(15)
  await root.query("UPDATE people SET name = CONCAT(name, ' II')")
  expect(await check(notes)).toMatchObject({ ok: true, found: 0 })
})

test('negative control: who rewrites the end and has it signed anew is not found without a checkpoint from before', async () => {
  const fork = tamperings.find(({ name }) => name.startsWith('fork'))!
  await fork.act(worldOf(1))
  expect((await check([])).faults).toEqual([])
  expect(await check(notes.slice(-1))).toMatchObject({ ok: false })
  await putBack(fork)
})

const worldOf = (one: number): World => ({
  root,
  random: seededRandom(seed + one),
  held,
  signer: scene.harness.deps.signer,
})

test(`R6 with seed ${seed}: each of ${runs} tamperings is found, and the first bad entry is named`, async () => {
  const missed: string[] = []
  const counts = new Map<string, number>()
  for (let run = 0; run < runs; run++) {
    const tampering = tamperings[run % tamperings.length]!
    const world = worldOf(run * 7)
    const { what, right, keptOver = 0 } = await tampering.act(world)
    const kept = world.random.pick(notes.filter(({ size }) => size >= keptOver))
    const { ok, faults } = await check([kept])
    const [first] = faults
    if (ok || !first || !right(first)) {
      missed.push(
        `${run}: ${tampering.name} (${what}), kept ${kept.size}: ${first ? JSON.stringify(first) : 'not found'}`,
      )
    }
    counts.set(tampering.name, (counts.get(tampering.name) ?? 0) + 1)
    await putBack(tampering)
    if (run % 100 === 99) expect(await check(notes)).toMatchObject({ ok: true })
  }
  expect(missed).toEqual([])
  expect(counts.size).toBe(new Set(tamperings.map(({ name }) => name)).size)
})

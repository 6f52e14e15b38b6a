import { type ChildProcess, spawn } from 'node:child_process'
import { Agent, get } from 'node:http'
import { join } from 'node:path'
import { createConnection } from 'mariadb'
import { lineColumns } from '../../server/models/record.ts'
import { startServer } from '../support/server-process.ts'
import { type FilledDatabase, filledDatabase } from './fill/filled-database.ts'
import { type BenchRow, median } from './row.ts'

/**
 * P5: a page of 50 by each filter of History at a million records, against the same rows by SQL written by hand, and against
 * ourselves at ten thousand. `OGEE_BENCH_RECORDS` makes the million smaller; `OGEE_FILL_DIR` keeps the filling.
 */
const large = Number(process.env.OGEE_BENCH_RECORDS ?? 1_000_000)
const small = 10_000
const rounds = 60

type Case = {
  name: string
  /** Of `GET /trims`. */
  query: Record<string, string>
  /** By hand: what stands behind `FROM records r`, newest 51. */
  sql: string
  values: readonly string[]
}

/** Both sizes are open at once and asked in turns, so that what else the machine does falls on both. */
export async function benchHistory(): Promise<readonly BenchRow[]> {
  const much = await openSide(large)
  const little = await openSide(small)
  try {
    const rows: BenchRow[] = []
    for (const [i, one] of much.cases.entries()) {
      const { ours, peer, before } = await race(one, little.cases[i]!, much, little)
      rows.push(row(`page by ${one.name}, ${large} records`, ours, peer, 1.5))
      rows.push(row(`page by ${one.name}, against ${small}`, ours, before, 1.3))
    }
    return rows
  } finally {
    await little.close()
    await much.close()
  }
}

const row = (name: string, ours: number, peer: number, goal: number): BenchRow => ({
  id: 'P5',
  name,
  ours: `${ours.toFixed(2)} ms`,
  peer: `${peer.toFixed(2)} ms`,
  ratio: ours / peer,
  goal: `<= ${goal.toFixed(2)}`,
  met: ours <= goal * peer,
})

type Side = { url: string; token: string; peerUrl: string; cases: Case[]; close: () => Promise<void> }

async function openSide(count: number): Promise<Side> {
  const database = await filledDatabase(count)
  const server = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    dataDir: database.dataDir,
    env: { OGEE_LOG: 'warn' },
  })
  const cases = await casesOf(database)
  const peer = await startPeer(database.url, cases)
  return {
    url: server.url,
    token: server.accounts().token,
    peerUrl: peer.url,
    cases,
    close: async () => {
      peer.process.kill()
      await server.stop()
      await database.stop()
    },
  }
}

async function race(one: Case, same: Case, much: Side, little: Side) {
  const agent = new Agent({ keepAlive: true, maxSockets: 1 })
  const ask = ({ query }: Case, { url, token }: Side) => {
    const address = `${url}/api/v1/trims?${new URLSearchParams({ ...query, limit: '50' })}`
    return timed(address, agent, { authorization: `Bearer ${token}` })
  }
  const values = new URLSearchParams({ values: JSON.stringify(one.values) })
  const times = { ours: [] as number[], peer: [] as number[], before: [] as number[] }
  for (let round = -10; round < rounds; round++) {
    const ours = await ask(one, much)
    const peer = await timed(`${much.peerUrl}/${one.name}?${values}`, agent, {})
    const before = await ask(same, little)
    if (String(ours.ids) !== String(peer.ids)) throw new Error(`${one.name}: the peer found other records.`)
    if (round < 0) continue
    times.ours.push(ours.ms)
    times.peer.push(peer.ms)
    times.before.push(before.ms)
  }
  agent.destroy()
  return { ours: median(times.ours), peer: median(times.peer), before: median(times.before) }
}

function timed(
  url: string,
  agent: Agent,
  headers: Record<string, string>,
): Promise<{ ms: number; ids: string[] }> {
  const since = process.hrtime.bigint()
  return new Promise((resolve, reject) => {
    get(url, { agent, headers }, (response) => {
      const chunks: Buffer[] = []
      response.on('data', (chunk: Buffer) => chunks.push(chunk))
      response.on('end', () => {
        const ms = Number(process.hrtime.bigint() - since) / 1e6
        const text = Buffer.concat(chunks).toString()
        if (response.statusCode !== 200) return reject(new Error(`${url}: ${response.statusCode} ${text}`))
        const { items } = JSON.parse(text) as { items: { id: string }[] }
        resolve({ ms, ids: items.map(({ id }) => id) })
      })
    }).on('error', reject)
  })
}

/** Each filter by a value from the middle of the filling, so that neither size is asked for what it lacks. */
async function casesOf({ socket }: FilledDatabase): Promise<Case[]> {
  const root = await createConnection({
    socketPath: socket,
    user: 'root',
    database: 'ogee',
    bigIntAsNumber: true,
  })
  const [middle] = await root.query<{ unit: string; lot: string; design: string }[]>(
    `SELECT unit, lot, design FROM records WHERE lot LIKE 'F%' AND number >=
      (SELECT FLOOR(MAX(number) / 2) FROM records) ORDER BY number LIMIT 1`,
  )
  const [station] = await root.query<{ id: string }[]>("SELECT id FROM stations WHERE name = 'Station A'")
  const [person] = await root.query<{ id: string }[]>("SELECT id FROM people WHERE role = 'engineer'")
  const [last] = await root.query<{ day: string }[]>(
    `SELECT DATE_FORMAT(MAX(recorded_at) - INTERVAL 2 DAY, '%Y-%m-%d') AS day FROM records WHERE lot LIKE 'F%'`,
  )
  await root.end()
  const { unit, lot } = middle!
  const begins = unit.slice(0, -4)
  const by = (
    name: string,
    query: Record<string, string>,
    where: string,
    values: string[],
    index: string,
  ): Case => ({
    name,
    query,
    sql: `FROM records r FORCE INDEX (${index}) WHERE ${where}`,
    values,
  })
  const day = last!.day
  return [
    by('nothing', {}, 'TRUE', [], 'records_time'),
    by('unit', { unit }, 'r.unit = ?', [unit], 'records_unit'),
    by(
      'serial',
      { serial: begins },
      'r.unit_id IN (SELECT id FROM units WHERE serial LIKE ?)',
      [`${begins}%`],
      'records_place',
    ),
    by('lot', { lot }, 'r.lot = ?', [lot], 'records_in_lot'),
    by('design', { design: 'DBC-16' }, 'r.design = ?', ['DBC-16'], 'records_design'),
    by(
      'revision',
      { design: 'DBC-16', revision: '1' },
      'r.design = ? AND r.revision = 1',
      ['DBC-16'],
      'records_revision',
    ),
    by('station', { station: station!.id }, 'r.station_id = ?', [station!.id], 'records_station'),
    by('token', { by: 'demoB000' }, 'r.by_id = ?', ['demoB000'], 'records_by'),
    by('person', { by: person!.id }, 'r.by_id = ?', [person!.id], 'records_by'),
    by('verdict', { verdict: 'out-of-reach' }, 'r.verdict = ?', ['out-of-reach'], 'records_verdict'),
    by('outcome', { verdict: 'fail' }, 'r.verdict = ?', ['fail'], 'records_verdict'),
    by('kind', { kind: 'verify' }, 'r.kind = ?', ['verify'], 'records_kind'),
    by(
      'time',
      { from: day, to: day },
      'r.recorded_at >= ? AND r.recorded_at < ? + INTERVAL 1 DAY',
      [day, day],
      'records_time',
    ),
    by('attempt', { attempt: '9' }, 'r.attempt_band = ?', ['9'], 'records_attempt'),
  ]
}

async function startPeer(
  databaseUrl: string,
  cases: readonly Case[],
): Promise<{ url: string; process: ChildProcess }> {
  const statements = Object.fromEntries(
    cases.map(({ name, sql }) => [
      name,
      `SELECT ${lineColumns} ${sql} ORDER BY r.recorded_at DESC, r.id DESC LIMIT 51`,
    ]),
  )
  const child = spawn(process.execPath, ['--import', 'tsx', join(import.meta.dirname, 'peer-history.ts')], {
    stdio: ['pipe', 'pipe', 'inherit'],
    env: { ...process.env, NODE_ENV: 'production' },
  })
  child.stdin.write(JSON.stringify({ databaseUrl, statements }))
  const port = await new Promise<string>((resolve) =>
    child.stdout.once('data', (chunk: Buffer) => resolve(chunk.toString().trim())),
  )
  return { url: `http://127.0.0.1:${port}`, process: child }
}

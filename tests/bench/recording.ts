import { type ChildProcess, spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { Agent, request } from 'node:http'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { type Connection, createConnection } from 'mariadb'
import { startMariadb } from '../../server/setup/mariadb.mjs'
import { delivery } from '../faults/recording-client.ts'
import { seededRandom } from '../support/random.ts'
import { type ServerProcess, startServer } from '../support/server-process.ts'
import { type BenchRow, median } from './row.ts'

/** P4, single posts: recorded trims a second at 32 clients against the bare route, in turns in the same run. */

const rounds = 5
const postsARound = 2_000

export async function benchRecording(): Promise<readonly BenchRow[]> {
  const dir = mkdtempSync(join(tmpdir(), 'ogee-bench-'))
  const database = await startMariadb({ dir, size: 'start' })
  const ours = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    env: { OGEE_LOG: 'warn' },
  })
  const { token } = ours.accounts()
  try {
    const peer = await startPeer(database.url, await template(ours, token, database.socket))
    const rates = await race(ours.url, token, peer.url)
    peer.process.kill()
    return rows(rates)
  } finally {
    await ours.remove()
    await database.stop()
    rmSync(dir, { recursive: true, force: true })
  }
}

type Rates = { ours: number[]; peer: number[]; bare: number[] }

async function race(oursUrl: string, token: string, peerUrl: string): Promise<Rates> {
  const rates: Rates = { ours: [], peer: [], bare: [] }
  const random = seededRandom(1)
  let index = 0
  const batch = () => Array.from({ length: postsARound }, () => delivery(index++, random))
  for (let round = -1; round < rounds; round += 1) {
    const measured = {
      ours: await rateOf(`${oursUrl}/api/v1/trims`, token, batch()),
      peer: await rateOf(`${peerUrl}/trims`, token, batch()),
      bare: await rateOf(`${peerUrl}/bare`, token, batch()),
    }
    // The first round warms both up.
    if (round >= 0) for (const name of ['ours', 'peer', 'bare'] as const) rates[name].push(measured[name])
  }
  return rates
}

/** Posts all, `clients` at a time over kept connections; gives posts a second. Any answer but 201 ends the bench. */
export async function rateOf(
  url: string,
  token: string,
  items: readonly { key: string; body: string }[],
  clients = 32,
): Promise<number> {
  const agent = new Agent({ keepAlive: true, maxSockets: clients })
  let next = 0
  const since = process.hrtime.bigint()
  await Promise.all(
    Array.from({ length: clients }, async () => {
      for (let item = items[next++]; item; item = items[next++]) await post(url, token, item, agent)
    }),
  )
  const seconds = Number(process.hrtime.bigint() - since) / 1e9
  agent.destroy()
  return items.length / seconds
}

function post(
  url: string,
  token: string,
  { key, body }: { key: string; body: string },
  agent: Agent,
): Promise<void> {
  const headers = {
    authorization: `Bearer ${token}`,
    'content-type': 'application/json',
    'content-length': Buffer.byteLength(body),
    'idempotency-key': key,
  }
  return new Promise((resolve, reject) => {
    const sent = request(url, { method: 'POST', headers, agent }, (response) => {
      response.resume()
      response.on('end', () =>
        response.statusCode === 201 ? resolve() : reject(new Error(`${url}: ${response.statusCode}`)),
      )
    })
    sent.on('error', reject)
    sent.end(body)
  })
}

/** One real record: what the peer writes again and again, with another id, unit, key and hash. */
async function template(ours: ServerProcess, token: string, socket: string) {
  const { key, body } = delivery(9_999_999, seededRandom(2))
  const response = await fetch(`${ours.url}/api/v1/trims`, {
    method: 'POST',
    headers: { authorization: `Bearer ${token}`, 'content-type': 'application/json', 'idempotency-key': key },
    body,
  })
  const answer = await response.text()
  const { id } = JSON.parse(answer) as { id: string }
  const root = await createConnection({
    socketPath: socket,
    user: 'root',
    database: 'ogee',
    dateStrings: true,
  })
  const [record] = await root.query<Record<string, unknown>[]>('SELECT * FROM records WHERE id = ?', [id])
  const [leaf] = await root.query<{ body: Buffer }[]>('SELECT body FROM ledger_leaves WHERE id = ?', [
    record?.leaf_id,
  ])
  const [codes] = await root.query<{ state: string }[]>('SELECT state FROM unit_codes WHERE unit_id = ?', [
    record?.unit_id,
  ])
  const [used] = await root.query<{ scope: string }[]>(
    'SELECT scope FROM idempotency_keys WHERE record_id = ?',
    [id],
  )
  await copySchema(root)
  await root.end()
  return {
    body: leaf?.body.toString('utf8') ?? '',
    record: { ...plain(record ?? {}), receipt_signature: 'x'.repeat(64) },
    state: codes?.state ?? '',
    scope: used?.scope ?? '',
    answer,
  }
}

const plain = (row: Record<string, unknown>) =>
  Object.fromEntries(
    Object.entries(row).map(([name, value]) => [name, typeof value === 'bigint' ? Number(value) : value]),
  )

/** The peer writes into tables of its own, made alike, so that neither slows the other by what it has written. */
async function copySchema(root: Connection): Promise<void> {
  await root.query('CREATE DATABASE peer CHARACTER SET utf8mb4 COLLATE utf8mb4_bin')
  for (const table of [
    'idempotency_keys',
    'units',
    'ledger_leaves',
    'ledger_pending',
    'records',
    'unit_codes',
  ]) {
    await root.query(`CREATE TABLE peer.${table} LIKE ogee.${table}`)
    await root.query(`GRANT SELECT, INSERT, UPDATE ON peer.${table} TO 'ogee_app'@'127.0.0.1'`)
  }
}

async function startPeer(
  databaseUrl: string,
  values: object,
): Promise<{ url: string; process: ChildProcess }> {
  const script = join(import.meta.dirname, 'peer-recording.ts')
  const child = spawn(process.execPath, ['--import', 'tsx', script], {
    stdio: ['pipe', 'pipe', 'inherit'],
    env: { ...process.env, NODE_ENV: 'production' },
  })
  child.stdin.write(JSON.stringify({ ...values, databaseUrl: databaseUrl.replace(/\/ogee$/, '/peer') }))
  const port = await new Promise<string>((resolve) =>
    child.stdout.once('data', (chunk: Buffer) => resolve(chunk.toString().trim())),
  )
  return { url: `http://127.0.0.1:${port}`, process: child }
}

function rows({ ours, peer, bare }: Rates): BenchRow[] {
  const per = (rate: number) => `${rate.toFixed(0)} /s`
  const [own, other, inserts] = [median(ours), median(peer), median(bare)]
  return [
    {
      id: 'P4',
      name: 'recorded trims at 32 clients',
      ours: per(own),
      peer: per(other),
      ratio: own / other,
      goal: '>= 1.00',
      met: own >= other,
    },
    {
      id: 'P4',
      name: 'the same beside bare inserts',
      ours: per(own),
      peer: per(inserts),
      ratio: own / inserts,
      goal: 'none',
      met: true,
    },
  ]
}

import { spawn } from 'node:child_process'
import { createHash } from 'node:crypto'
import { join } from 'node:path'
import { createConnection } from 'mariadb'
import { openDatabase } from '../../server/db/connection.ts'
import { transaction } from '../../server/db/transaction.ts'
import { sha256 } from '../../server/ledger/crypto.ts'
import { insertLeaves, newLeaf } from '../../server/ledger/leaves.ts'
import { openLedger } from '../../server/ledger/open-ledger.ts'
import { sequencePass } from '../../server/ledger/sequence.ts'
import { growingTree } from '../../shared/ledger/check/growing-tree.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { delivery } from '../faults/recording-client.ts'
import { inParallel } from '../faults/rig.ts'
import { seededRandom } from '../support/random.ts'
import { type ServerProcess, startServer } from '../support/server-process.ts'
import { type FilledDatabase, filledDatabase } from './fill/filled-database.ts'
import { type BenchRow, median } from './row.ts'

/**
 * P6: `ogee ledger check` of a million records against reading and hashing the same rows; a proof at a million against one at
 * ten thousand; what sequencing takes beside recording. `OGEE_BENCH_RECORDS` makes the million smaller.
 */
const large = Number(process.env.OGEE_BENCH_RECORDS ?? 1_000_000)
const small = 10_000
const proofs = 400
const root = join(import.meta.dirname, '../..')

export async function benchLedger(): Promise<readonly BenchRow[]> {
  const little = await onFilled(small, async (server, _, token) => proofTime(server, token))
  return onFilled(large, async (server, database, token) => {
    const much = await proofTime(server, token)
    const peer = await readAndHash(database)
    const quick = await checkTime(server, token, ['--no-receipts'])
    const whole = await checkTime(server, token, [])
    const perTrim = await trimTime(server)
    await server.stop()
    return [
      rate(`ledger check without receipts, ${large} records`, quick, peer, '>= 0.60'),
      rate('ledger check, receipts too', whole, peer, 'none'),
      {
        id: 'P6',
        name: `proof at ${large}, against ${small}`,
        ours: `${much.toFixed(2)} ms`,
        peer: `${little.toFixed(2)} ms`,
        ratio: much / little,
        goal: '<= 1.50',
        met: much <= 1.5 * little,
      },
      await sequencing(database, perTrim),
    ]
  })
}

function rate(name: string, ours: number, peer: number, goal: string): BenchRow {
  const per = (seconds: number) => `${Math.round(large / seconds)} /s`
  const met = goal === 'none' || peer / ours >= 0.6
  return { id: 'P6', name, ours: per(ours), peer: per(peer), ratio: peer / ours, goal, met }
}

async function onFilled<T>(
  count: number,
  work: (server: ServerProcess, database: FilledDatabase, token: string) => Promise<T>,
): Promise<T> {
  const database = await filledDatabase(count)
  const server = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    dataDir: database.dataDir,
    env: { OGEE_LOG: 'warn' },
  })
  try {
    return await work(server, database, await ledgerToken(server))
  } finally {
    await server.stop()
    await database.stop()
  }
}

async function ledgerToken(server: ServerProcess): Promise<string> {
  const { email, password } = server.accounts().people.find(({ role }) => role === 'administrator')!
  const headers = { 'content-type': 'application/json', 'x-ogee': '1', 'sec-fetch-site': 'same-origin' }
  const ask = async (path: string, body: object, more: Record<string, string> = {}) => {
    const reply = await fetch(`${server.url}/api/v1${path}`, {
      method: 'POST',
      headers: { ...headers, ...more },
      body: JSON.stringify(body),
    })
    if (!reply.ok) throw new Error(`${path}: ${reply.status} ${await reply.text()}`)
    return reply
  }
  const cookie = (await ask('/session', { email, password })).headers.get('set-cookie')!.split(';')[0]!
  const asked = { name: 'bench', station: null, scopes: ['ledger:read'], designs: null, days: 1 }
  return ((await (await ask('/tokens', asked, { cookie })).json()) as { token: string }).token
}

/** Milliseconds of one proof of a random record, the middle of many. */
async function proofTime(server: ServerProcess, token: string): Promise<number> {
  const headers = { authorization: `Bearer ${token}` }
  const trims = { authorization: `Bearer ${server.accounts().token}` }
  const page = await fetch(`${server.url}/api/v1/trims?limit=500`, { headers: trims })
  const ids = ((await page.json()) as { items: { id: string }[] }).items.map(({ id }) => id)
  const random = seededRandom(1)
  const times: number[] = []
  for (let i = -50; i < proofs; i++) {
    const since = process.hrtime.bigint()
    const reply = await fetch(`${server.url}/api/v1/ledger/proof/${random.pick(ids)}`, { headers })
    const text = await reply.text()
    if (!reply.ok) throw new Error(`proof: ${reply.status} ${text}`)
    if (i >= 0) times.push(Number(process.hrtime.bigint() - since) / 1e6)
  }
  return median(times)
}

/** Seconds of the whole command. */
async function checkTime(server: ServerProcess, token: string, more: readonly string[]): Promise<number> {
  const since = process.hrtime.bigint()
  const child = spawn(process.execPath, [join(root, 'dist/cli/ogee.mjs'), 'ledger', 'check', ...more], {
    env: { PATH: process.env.PATH ?? '', HOME: root, OGEE_URL: server.url, OGEE_TOKEN: token },
    stdio: ['ignore', 'pipe', 'inherit'],
  })
  let out = ''
  child.stdout.on('data', (chunk: Buffer) => {
    out += chunk.toString()
  })
  const code = await new Promise((resolve) => child.once('close', resolve))
  const seconds = Number(process.hrtime.bigint() - since) / 1e9
  const { ok, records } = JSON.parse(out) as { ok: boolean; records: number }
  if (code !== 0 || !ok || records < large) throw new Error(`ledger check: ${code} ${out.slice(0, 500)}`)
  return seconds
}

/** Seconds to read entries, leaves, records and tree through the connector and to hash leaves and tree, and no more. */
async function readAndHash({ socket }: FilledDatabase): Promise<number> {
  const since = process.hrtime.bigint()
  const connection = await createConnection({
    socketPath: socket,
    user: 'root',
    database: 'ogee',
    timezone: 'Z',
    bigIntAsNumber: true,
  })
  const tree = growingTree((bytes) => createHash('sha256').update(bytes).digest())
  for (let from = 0; ; from += 2_000) {
    const rows = await connection.query<{ leafKind: 'record'; at: Date; body: Buffer }[]>(
      `SELECT e.idx, l.kind AS leafKind, l.at, l.hash, l.body, r.* FROM ledger_entries e JOIN ledger_leaves l ON l.id = e.leaf_id
        LEFT JOIN records r ON r.leaf_id = e.leaf_id WHERE e.idx >= ? ORDER BY e.idx LIMIT 2000`,
      [from],
    )
    await connection.query(
      'SELECT level, idx, hash FROM ledger_nodes WHERE level = 0 AND idx >= ? LIMIT 4000',
      [from],
    )
    for (const { leafKind: kind, at, body } of rows) {
      tree.add(leafHash(sha256, leafBytes(kind, at.toISOString(), body)), '')
    }
    if (rows.length < 2_000) break
  }
  await connection.end()
  return Number(process.hrtime.bigint() - since) / 1e9
}

/** Seconds that one recorded trim takes at 32 clients. */
async function trimTime(server: ServerProcess): Promise<number> {
  const random = seededRandom(3)
  const { token } = server.accounts()
  const items = Array.from({ length: 3_000 }, (_, i) => delivery(i, random))
  const post = async ({ key, body }: { key: string; body: string }) => {
    const reply = await fetch(`${server.url}/api/v1/trims`, {
      method: 'POST',
      headers: {
        authorization: `Bearer ${token}`,
        'content-type': 'application/json',
        'idempotency-key': key,
      },
      body,
    })
    if (reply.status !== 201) throw new Error(`trim: ${reply.status} ${await reply.text()}`)
    await reply.arrayBuffer()
  }
  await inParallel(items.slice(0, 1_000), 32, post)
  const since = process.hrtime.bigint()
  await inParallel(items.slice(1_000), 32, post)
  return Number(process.hrtime.bigint() - since) / 1e9 / 2_000
}

/** Places for ten thousand leaves, by passes that nothing runs beside: an upper bound of what recording loses by them. */
async function sequencing(filled: FilledDatabase, perTrim: number): Promise<BenchRow> {
  const database = openDatabase(filled.url)
  const now = () => new Date()
  const keyFile = join(filled.dataDir, 'ledger.key')
  const { signer } = await openLedger(database, { keyFile, ledgerName: null, now })
  while ((await sequencePass(database, signer, now)).more);
  const count = 10_000
  for (let i = 0; i < count; i += 500) {
    const leaves = Array.from({ length: 500 }, (_, j) =>
      newLeaf('token', now().toISOString(), { format: 'ogee.bench/1', n: i + j, at: process.hrtime()[1] }),
    )
    await transaction(database, (sql) => insertLeaves(sql, leaves))
  }
  const since = process.hrtime.bigint()
  while ((await sequencePass(database, signer, now)).more);
  const perLeaf = Number(process.hrtime.bigint() - since) / 1e9 / count
  await database.close()
  const share = perLeaf / perTrim
  return {
    id: 'P6',
    name: 'sequencing, of the time of a trim at 32 clients',
    ours: `${(perLeaf * 1e6).toFixed(0)} us`,
    peer: `${(perTrim * 1e6).toFixed(0)} us`,
    ratio: share,
    goal: '<= 0.10',
    met: share <= 0.1,
  }
}

import { type ChildProcess, spawn } from 'node:child_process'
import { once } from 'node:events'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { createInterface } from 'node:readline'
import { buildCli } from '../../server/setup/build-cli.mjs'
import { startMariadb } from '../../server/setup/mariadb.mjs'
import { type Delivery, delivery } from '../faults/recording-client.ts'
import { seededRandom } from '../support/random.ts'
import { startServer } from '../support/server-process.ts'
import { rateOf } from './recording.ts'
import { type BenchRow, median } from './row.ts'

/** P4, batches and the command line: recorded trims a second, each way in turns in the same run. `OGEE_BENCH_UNITS` sets the size. */

const units = Number(process.env.OGEE_BENCH_UNITS ?? 10_000)
const rounds = 3
const linesABlock = 500
const blocksAtOnce = 4

type Ways = 'single' | 'alone' | 'blocks' | 'batch' | 'pipe'
type Rates = Record<Ways, number[]>

export async function benchBatches(): Promise<readonly BenchRow[]> {
  const dir = mkdtempSync(join(tmpdir(), 'ogee-bench-'))
  await buildCli(join(import.meta.dirname, '../..'), join(dir, 'cli'))
  const database = await startMariadb({ dir, size: 'start' })
  const server = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    env: { OGEE_LOG: 'warn' },
  })
  try {
    return rows(await race(dir, server.url, server.accounts().token))
  } finally {
    await server.remove()
    await database.stop()
    rmSync(dir, { recursive: true, force: true })
  }
}

async function race(dir: string, url: string, token: string): Promise<Rates> {
  const rates: Rates = { single: [], alone: [], blocks: [], batch: [], pipe: [] }
  const random = seededRandom(1)
  let index = 0
  const some = (n: number) => Array.from({ length: n }, () => delivery(index++, random))
  const cli = (args: readonly string[], stdio: 'pipe' | 'ignore') =>
    spawn(process.execPath, [join(dir, 'cli/ogee.mjs'), ...args], {
      env: { PATH: process.env.PATH ?? '', HOME: dir, OGEE_URL: url, OGEE_TOKEN: token },
      stdio: [stdio, stdio, 'inherit'],
    })
  const alone = Math.ceil(units / 10)
  const pipe = openPipe(cli(['pipe'], 'pipe'))
  for (let round = -1; round < rounds; round += 1) {
    const measured: Record<Ways, number> = {
      single: await rateOf(`${url}/api/v1/trims`, token, some(Math.ceil(units / 2))),
      blocks: await rateOfBlocks(url, token, some(units)),
      batch: await rateOfBatch(dir, cli, some(units)),
      alone: await rateOf(`${url}/api/v1/trims`, token, some(alone), 1),
      pipe: await pipe.rateOf(some(alone)),
    }
    // The first round warms up all of them: server, our own client, and the pipe that a test program would keep.
    if (round >= 0) for (const way of Object.keys(rates) as Ways[]) rates[way].push(measured[way])
  }
  await pipe.close()
  return rates
}

async function rateOfBlocks(url: string, token: string, items: readonly Delivery[]): Promise<number> {
  const blocks: string[] = []
  for (let i = 0; i < items.length; i += linesABlock)
    blocks.push(
      items
        .slice(i, i + linesABlock)
        .map(lineOf)
        .join(''),
    )
  return await timed(items.length, async () => {
    let next = 0
    const sender = async () => {
      for (let block = blocks[next++]; block !== undefined; block = blocks[next++]) {
        const response = await fetch(`${url}/api/v1/batches`, {
          method: 'POST',
          headers: { authorization: `Bearer ${token}`, 'content-type': 'application/x-ndjson' },
          body: block,
        })
        const end = (await response.text()).trimEnd().split('\n').at(-1) ?? ''
        if (!end.includes('"refused":0')) throw new Error(`POST /batches: ${response.status} ${end}`)
      }
    }
    await Promise.all(Array.from({ length: blocksAtOnce }, sender))
  })
}

type Start = (args: readonly string[], stdio: 'pipe' | 'ignore') => ChildProcess

/** A whole run of the command on a file, its start included. */
async function rateOfBatch(dir: string, cli: Start, items: readonly Delivery[]): Promise<number> {
  const file = join(dir, 'units.csv')
  writeFileSync(file, `unit,channel,code,measured\n${items.map(rowsOf).join('')}`)
  return await timed(items.length, async () => {
    const args = ['batch', file, '--design', 'DBS-A', '--applied', 'neutral', '--format', 'csv']
    const [code] = (await once(cli(args, 'ignore'), 'exit')) as [number]
    if (code !== 0) throw new Error(`ogee batch ended with ${code}`)
  })
}

function rowsOf({ unit, body }: Delivery): string {
  const { points } = JSON.parse(body) as { points: { code: number; measured: number }[] }
  return points.map(({ code, measured }) => `${unit},1,${code},${measured}\n`).join('')
}

/** One line at a time: the next is written when the answer to the one before has come, as a test program would. */
function openPipe(child: ChildProcess) {
  if (!child.stdin || !child.stdout) throw new Error('no pipe')
  const { stdin } = child
  const answers = createInterface({ input: child.stdout })[Symbol.asyncIterator]()
  const ask = async ({ key, body }: Delivery) => {
    stdin.write(`{"id":1,"do":"trim","key":"${key}",${body.slice(1)}\n`)
    const { value } = await answers.next()
    if (!String(value).startsWith('{"id":1,"exit":0')) throw new Error(`ogee pipe: ${value}`)
  }
  return {
    rateOf: (items: readonly Delivery[]) =>
      timed(items.length, async () => {
        for (const item of items) await ask(item)
      }),
    close: async () => {
      stdin.end()
      await once(child, 'exit')
    },
  }
}

const lineOf = ({ key, body }: Delivery) => `{"key":"${key}",${body.slice(1)}\n`

async function timed(n: number, work: () => Promise<void>): Promise<number> {
  const since = process.hrtime.bigint()
  await work()
  return n / (Number(process.hrtime.bigint() - since) / 1e9)
}

function rows(rates: Rates): BenchRow[] {
  const row = (name: string, ours: number[], peer: number[], goal: number): BenchRow => {
    const per = (rates: number[]) => `${median(rates).toFixed(0)} /s`
    const ratio = median(ours) / median(peer)
    const text = `>= ${goal.toFixed(2)}`
    return { id: 'P4', name, ours: per(ours), peer: per(peer), ratio, goal: text, met: ratio >= goal }
  }
  return [
    row(`POST /batches by ${linesABlock}, single posts`, rates.blocks, rates.single, 3),
    row('ogee batch, POST /batches', rates.batch, rates.blocks, 0.6),
    row('ogee pipe, posts over one connection', rates.pipe, rates.alone, 0.8),
  ]
}

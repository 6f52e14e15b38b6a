import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { type Random, runSeed, seededRandom } from '../support/random.ts'
import { type ServerProcess, startServer } from '../support/server-process.ts'
import { disagreements } from './checker.ts'
import { type Acknowledged, acknowledged, delivery } from './recording-client.ts'
import { type Rig, startRig } from './rig.ts'

/** R4: two servers on one database, one killed every five seconds: every request succeeds within three tries. */

const seconds = Number(process.env.OGEE_TWO_SERVERS_SECONDS ?? 60)
const killEveryMs = 5_000
const seed = runSeed()
let rig: Rig
let second: ServerProcess
let ofSecond = ''

beforeAll(async () => {
  rig = await startRig()
  ofSecond = mkdtempSync(join(tmpdir(), 'ogee-second-'))
  second = await startServer({
    ...rig.addresses(),
    dataDir: ofSecond,
    // One ledger, one key: both servers sign with it.
    env: { OGEE_LOG: 'warn', OGEE_DEMO: '0', OGEE_KEY_FILE: join(rig.server.dataDir, 'ledger.key') },
  })
})
afterAll(async () => {
  await second.remove()
  await rig.close()
  rmSync(ofSecond, { recursive: true, force: true })
})

type Asked = { path: string; init?: RequestInit }
type Tried = { tries: number; status: number; text: string }

/** As a client with two addresses does it: the other one after a failure, a moment later, three times in all. */
async function within3(urls: readonly string[], first: number, { path, init }: Asked): Promise<Tried> {
  let last: Tried = { tries: 0, status: 0, text: '' }
  for (let tries = 1; tries <= 3; tries += 1) {
    try {
      const url = urls[(first + tries - 1) % urls.length]
      const response = await fetch(`${url}/api/v1${path}`, {
        ...init,
        headers: { ...init?.headers, authorization: `Bearer ${rig.token}` },
        signal: AbortSignal.timeout(30_000),
      })
      last = { tries, status: response.status, text: await response.text() }
      if (response.status < 409) return last
    } catch (error) {
      last = { tries, status: 0, text: String(error) }
    }
    await sleep(100)
  }
  return last
}

function requestOf(index: number, random: Random, known: readonly Acknowledged[]): Asked {
  const any = known.length > 0 ? random.pick(known) : null
  if (any && index % 3 === 1) return { path: `/trims/${any.id}` }
  if (any && index % 3 === 2) return { path: `/units?serial=${any.unit}&design=DBS-A` }
  const { key, body } = delivery(index, random, 4)
  const headers = { 'content-type': 'application/json', 'idempotency-key': key }
  return { path: '/trims', init: { method: 'POST', headers, body } }
}

type Run = { kills: number; histogram: number[]; failed: string[]; known: Acknowledged[] }

/** Asks with six clients, by keys of its own, while one server after the other is killed and started again. */
async function killAndAsk(firstKey: number): Promise<Run> {
  const random = seededRandom(seed)
  const servers = [rig.server, second]
  const urls = servers.map(({ url }) => url)
  const run: Run = { kills: 0, histogram: [0, 0, 0, 0], failed: [], known: [] }
  let killing = true
  const killer = (async () => {
    const until = Date.now() + seconds * 1_000
    while (Date.now() < until) {
      await sleep(killEveryMs)
      const server = servers[run.kills % 2]!
      run.kills += 1
      await server.kill()
      await server.restart()
    }
  })().finally(() => {
    killing = false
  })
  let index = firstKey
  const clients = Array.from({ length: 6 }, async () => {
    while (killing) {
      index += 1
      const mine = index
      const asked = requestOf(mine, random, run.known)
      const { tries, status, text } = await within3(urls, mine % 2, asked)
      run.histogram[tries] = (run.histogram[tries] ?? 0) + 1
      if (status !== 200 && status !== 201) run.failed.push(`${asked.path}: ${status} ${text.slice(0, 200)}`)
      else if (asked.init) {
        const { key, unit } = { ...delivery(mine, random, 4) }
        run.known.push(acknowledged(key, unit, text))
      }
    }
  })
  await Promise.all([killer, ...clients])
  return run
}

/**
 * MariaDB itself was once seen to end with a segmentation fault in such a run, under nobody's supervision here. That says
 * nothing of two servers: the database is started again and the run repeated, once.
 */
async function killAndAskOnASoundDatabase(): Promise<Run> {
  try {
    const run = await killAndAsk(0)
    if (!rig.databaseFell()) return run
  } catch (error) {
    if (!rig.databaseFell()) throw error
  }
  process.stdout.write('R4: MariaDB itself fell over; once more from the start\n')
  await rig.restartDatabase()
  for (const server of [rig.server, second]) {
    await server.kill()
    await server.restart()
  }
  return killAndAsk(1_000_000)
}

describe(`R4 with seed ${seed}`, () => {
  test(`${seconds} s, one of two servers killed every 5 s: every request succeeds within 3 tries`, async () => {
    const { kills, histogram, failed, known } = await killAndAskOnASoundDatabase()
    process.stdout.write(`R4: ${kills} kills, tries of each request: ${histogram.slice(1).join(', ')}\n`)
    expect(failed).toEqual([])
    // Kills were met, or this has shown nothing.
    expect(histogram[2]! + histogram[3]!).toBeGreaterThan(0)
    await rig.settled()
    const root = await rig.asRoot()
    expect(await disagreements(root, known, 4)).toEqual([])
    await root.end()
  })

  test('negative control: with both servers gone three tries are not enough, and that is seen', async () => {
    const urls = [rig.server.url, second.url]
    await Promise.all([rig.server.kill(), second.kill()])
    const { tries, status } = await within3(urls, 0, { path: '/me' })
    expect([tries, status]).toEqual([3, 0])
    await Promise.all([rig.server.restart(), second.restart()])
    expect((await within3(urls, 0, { path: '/me' })).status).toBe(200)
  })
})

import { once } from 'node:events'
import { readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, expect, test } from 'vitest'
import type { Record as StoredRecord } from '../../shared/contract/record.ts'
import { builtCli, type Ran } from '../cli/support/built-cli.ts'
import { type Random, runSeed, seededRandom } from '../support/random.ts'
import { type Fate, startProxy } from '../support/tcp-proxy.ts'
import { disagreements } from './checker.ts'
import { type Acknowledged, delivery } from './recording-client.ts'
import { type Rig, startRig } from './rig.ts'

/** R1, R2 and L4 through `ogee batch`: whatever is killed or cut, the same file again completes and nothing is doubled. */

const kills = Number(process.env.OGEE_KILLS ?? 30)
const rows = Number(process.env.OGEE_ROWS ?? 5_000)
const seed = runSeed()
const cli = builtCli()
let rig: Rig

beforeAll(async () => {
  rig = await startRig()
})
afterAll(() => rig.close())

const env = (url = rig.server.url) => ({ OGEE_URL: url, OGEE_TOKEN: rig.token })

/** A file of invented units with keys that the checker knows; rounds are checked apart. */
function fileOf(round: number, units: number, random: Random): string {
  const lines = ['unit,channel,key,code,measured']
  for (let i = 0; i < units; i += 1) {
    const { unit, key, body } = delivery(i, random, round)
    const { points } = JSON.parse(body) as { points: { code: number; measured: number }[] }
    for (const { code, measured } of points) lines.push(`${unit},1,${key},${code},${measured}`)
  }
  const path = join(cli.folder, `batch-${round}.csv`)
  writeFileSync(path, `${lines.join('\n')}\n`)
  return path
}

const args = (file: string) => [
  ...['batch', file, '--design', 'DBS-A', '--applied', 'neutral', '--format', 'ndjson'],
]

/** What the command said was recorded: whole lines only, for it may have been killed in the middle of one. */
function acknowledged({ stdout }: Pick<Ran, 'stdout'>, round: number): Acknowledged[] {
  const lines = stdout.split('\n').slice(0, -1)
  return lines.flatMap((line) => {
    const { record } = JSON.parse(line) as { record?: StoredRecord }
    if (!record) return []
    const { notices: _, ledger: __, receipt, ...body } = record
    const index = Number(body.unit.split('-').at(-1))
    const key = `fault-${round}-${index}`
    return [{ key, unit: body.unit, id: body.id, leaf: receipt.leaf, canonical: JSON.stringify(body) }]
  })
}

/** Runs the same command until it says that all is done; gives what it said on the way, and how often it had to run. */
async function completed(file: string, round: number, url?: string) {
  const said: Acknowledged[] = []
  for (let runs = 1; runs <= 30; runs += 1) {
    const ran = await cli.run(args(file), { env: env(url) })
    said.push(...acknowledged(ran, round))
    if (ran.code === 0) return { said, runs }
    // Cut off, or nobody there: never that a unit is bad, and never a defect.
    expect([75, 69], ran.stderr).toContain(ran.code)
  }
  throw new Error('The batch did not complete in 30 runs.')
}

async function expectWhole(round: number, units: number, said: readonly Acknowledged[]): Promise<void> {
  await rig.settled()
  const root = await rig.asRoot()
  expect(await disagreements(root, said, round)).toEqual([])
  await root.end()
  expect(await recordedIn(round)).toBe(units)
}

async function recordedIn(round: number): Promise<number> {
  const root = await rig.asRoot()
  const [count] = await root.query<{ n: bigint }[]>(
    'SELECT COUNT(*) AS n FROM idempotency_keys WHERE idem_key LIKE ?',
    [`fault-${round}-%`],
  )
  await root.end()
  return Number(count?.n)
}

test(`R1 with seed ${seed}: server and database killed while batches run: 0 lost, 0 doubled`, async () => {
  const random = seededRandom(seed)
  const enough = Math.max(4, Math.ceil(kills / 5))
  let done = 0
  let killing = true
  const killer = (async () => {
    for (; done < enough; done += 1) {
      await sleep(100 + random.below(900))
      const which = random.pick(['server', 'database', 'both'] as const)
      if (which !== 'server') await rig.killDatabase()
      if (which !== 'database') await rig.server.kill()
      if (which !== 'server') await rig.restartDatabase()
      if (which !== 'database') await rig.server.restart()
    }
    killing = false
  })()
  const units = 1_500
  const rounds: { round: number; said: Acknowledged[] }[] = []
  for (let round = 100; killing; round += 1) {
    const file = fileOf(round, units, seededRandom(seed + round))
    const { said } = await completed(file, round)
    rounds.push({ round, said })
    // All over again: nothing is recorded, and every line tells of the record that is there.
    const { said: again } = await completed(file, round)
    expect(new Set(again.map(({ id }) => id))).toEqual(new Set(said.map(({ id }) => id)))
  }
  await killer
  expect(done).toBe(enough)
  for (const { round, said } of rounds) await expectWhole(round, units, said)
})

test(`L4 with seed ${seed}: the command killed or interrupted at random points completes when it is run again`, async () => {
  const random = seededRandom(seed + 1)
  const units = 600
  const begun = performance.now()
  await completed(fileOf(200, units, random), 200)
  const took = performance.now() - begun
  let stopped = 0
  let halfway = 0
  const enough = Math.min(200, Math.max(12, Math.ceil(kills / 3)))
  for (let round = 201; round <= 200 + enough; round += 1) {
    const file = fileOf(round, units, random)
    const child = cli.start(args(file), { env: env() })
    let stdout = ''
    child.stdout?.on('data', (piece: Buffer) => {
      stdout += piece.toString()
    })
    const gone = once(child, 'close')
    await sleep(random.next() * took)
    child.kill(round % 2 === 0 ? 'SIGKILL' : 'SIGINT')
    const [code] = await gone
    if (code !== 0) stopped += 1
    const before = acknowledged({ stdout }, round)
    const recorded = await recordedIn(round)
    if (recorded > 0 && recorded < units) halfway += 1
    const { said, runs } = await completed(file, round)
    expect(runs).toBe(1)
    expect(said).toHaveLength(units)
    await expectWhole(round, units, [...before, ...said])
  }
  // The harness must have hit something, or it shows nothing.
  expect(stopped).toBeGreaterThan(enough / 4)
  expect(halfway).toBeGreaterThan(0)
})

test(`R2 with seed ${seed}: connections cut in the middle of requests and answers, delayed, black-holed and reset`, async () => {
  const random = seededRandom(seed + 2)
  const fates: Fate[] = ['cut-request', 'cut-answer', 'reset', 'black-hole', 'delay']
  const proxy = await startProxy(Number(new URL(rig.server.url).port), random, () =>
    random.next() < 0.6 ? random.pick(fates) : 'pass',
  )
  try {
    const units = 1_500
    for (let round = 500; proxy.fates['cut-answer'] < 3 || proxy.fates['cut-request'] < 2; round += 1) {
      const file = fileOf(round, units, random)
      const { said } = await completed(file, round, `http://127.0.0.1:${proxy.port}`)
      await expectWhole(round, units, said)
    }
  } finally {
    await proxy.close()
  }
})

test(`one bad row among ${rows}: its unit is named and the others are recorded`, async () => {
  const random = seededRandom(seed + 3)
  const units = Math.floor(rows / 5)
  const file = fileOf(900, units, random)
  const bad = random.below(units)
  const lines = readFileSync(file, 'utf8').split('\n')
  const at = 1 + bad * 5 + 2
  lines[at] = `${lines[at]} kg`
  writeFileSync(file, lines.join('\n'))
  const ran = await cli.run(args(file), { env: env() })
  expect(ran.code).toBe(20)
  const wrong = ran.stdout
    .trimEnd()
    .split('\n')
    .map(
      (line) =>
        JSON.parse(line) as { line: number; exit: number; unit: string; problem?: { detail: string } },
    )
    .filter(({ exit }) => exit !== 0)
  expect(wrong).toEqual([
    expect.objectContaining({
      line: at + 1,
      exit: 65,
      unit: delivery(bad, random, 900).unit,
      problem: expect.objectContaining({ detail: expect.stringContaining(`Line ${at + 1}, measured:`) }),
    }),
  ])
  await expectWhole(900, units - 1, acknowledged(ran, 900))
})

test('serials arrive as they stand: quotes, emoji, leading zeros, case', async () => {
  const serials = ['007', '7', 'a "quoted" one', "O'Neil; DROP", '👩‍🔬 7', 'Größe', 'größe', '-5', '=1+1']
  const head = 'unit,channel,code,measured\n'
  const rowsOf = (serial: string) => {
    const cell = `"${serial.replaceAll('"', '""')}"`
    return [0, 131_072, 262_143].map((code) => `${cell},1,${code},${(10 * code) / 262_144}\n`).join('')
  }
  const more = ['batch', '-', '--design', 'DBS-A', '--applied', 'neutral', '--format', 'ndjson']
  const ran = await cli.run(more, {
    env: env(),
    input: head + [...serials, serials[0]!].map(rowsOf).join(''),
  })
  expect(ran.code).toBe(20)
  const answers = ran.stdout
    .trimEnd()
    .split('\n')
    .map((line) => JSON.parse(line) as { unit: string; problem?: { code: string } })
  expect(answers.map(({ unit }) => unit)).toEqual([...serials, '007'])
  expect(answers.at(-1)?.problem?.code).toBe('duplicate-unit')
  const root = await rig.asRoot()
  const stored = await root.query<{ serial: string; n: bigint }[]>(
    'SELECT u.serial, COUNT(r.id) AS n FROM units u JOIN records r ON r.unit_id = u.id WHERE u.serial IN (?) GROUP BY u.id',
    [serials],
  )
  await root.end()
  expect(new Set(stored.map(({ serial }) => serial))).toEqual(new Set(serials))
  expect(stored.every(({ n }) => Number(n) === 1)).toBe(true)
})

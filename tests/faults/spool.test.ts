import { type ChildProcess, spawn } from 'node:child_process'
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { runSeed, seededRandom } from '../support/random.ts'
import { delivery } from './recording-client.ts'
import { type Rig, startRig } from './rig.ts'

/**
 * R9: the command line is killed at random moments while it writes to a spool and while it sends from it. The server's
 * set equals the set that was said to be saved, each unit once, with the codes that were given out; and an entry is let
 * go only once a checkpoint of the ledger includes its record.
 */

const units = Number(process.env.OGEE_SPOOL_UNITS ?? 2_000)
const kills = Number(process.env.OGEE_SPOOL_KILLS ?? 20)
/** Every file is read after so many kills: after each in the short form, now and then where there are very many. */
const lookEvery = Math.max(1, Math.floor(units / 5_000))
const seed = runSeed()
const cli = join(import.meta.dirname, '../../dist/cli/ogee.mjs')
let rig: Rig
let home = ''
let spool = ''

beforeAll(async () => {
  home = mkdtempSync(join(tmpdir(), 'ogee-r9-'))
  spool = join(home, 'spool')
  mkdirSync(join(home, 'cache'))
  rig = await startRig()
})
afterAll(async () => {
  await rig.close()
  rmSync(home, { recursive: true, force: true })
})

const start = (args: readonly string[]): ChildProcess =>
  spawn(process.execPath, [cli, ...args], {
    env: {
      PATH: process.env.PATH ?? '',
      HOME: home,
      XDG_CACHE_HOME: join(home, 'cache'),
      OGEE_URL: rig.server.url,
      OGEE_TOKEN: rig.token,
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  })

type Ran = { code: number | null; killed: boolean; stderr: string }

/** Runs a command, kills it after `afterMs`, and hands on each whole line that it printed until then. */
async function run(args: readonly string[], afterMs: number, onLine: (line: string) => void): Promise<Ran> {
  const child = start(args)
  let rest = ''
  let stderr = ''
  child.stdout?.on('data', (piece: Buffer) => {
    const lines = (rest + piece.toString()).split('\n')
    rest = lines.pop() ?? ''
    for (const line of lines) onLine(line)
  })
  child.stderr?.on('data', (piece: Buffer) => (stderr += piece.toString()))
  const timer = Number.isFinite(afterMs) ? setTimeout(() => child.kill('SIGKILL'), afterMs) : undefined
  const [code, signal] = await new Promise<[number | null, NodeJS.Signals | null]>((resolve) =>
    child.once('close', (status, by) => resolve([status, by])),
  )
  clearTimeout(timer)
  return { code, killed: signal === 'SIGKILL', stderr }
}

/** Units in the folder, by reading every file: separate code from the product's. */
function inFolder(): Set<string> {
  const found = new Set<string>()
  for (const place of ['pending', 'sent', 'refused']) {
    for (const name of readdirSync(join(spool, place))) {
      if (name.endsWith('.problem.json')) continue
      const entry = JSON.parse(readFileSync(join(spool, place, name), 'utf8')) as { body: { unit: string } }
      found.add(entry.body.unit)
    }
  }
  return found
}

type Row = { unit: string; n: bigint; gain: number | null; offset: number | null; idx: bigint | null }

/** What the database's root sees of these units. */
async function inDatabase(): Promise<{ rows: Map<string, Row>; provenBelow: number }> {
  const root = await rig.asRoot()
  const rows = await root.query<Row[]>(
    `SELECT r.unit, COUNT(*) AS n, MAX(r.gain_code) AS gain, MAX(r.offset_code) AS \`offset\`, MAX(e.idx) AS idx
       FROM records r LEFT JOIN ledger_entries e ON e.leaf_id = r.leaf_id WHERE r.unit LIKE 'F-9-%' GROUP BY r.unit`,
  )
  const [head] = await root.query<{ size: bigint }[]>('SELECT checkpoint_size AS size FROM ledger_head')
  await root.end()
  return { rows: new Map(rows.map((row) => [row.unit, row])), provenBelow: Number(head?.size ?? 0) }
}

type Saved = Map<string, string>

/** What is neither in the folder nor proven to be in the ledger. */
async function lost(saved: Saved, folder = inFolder()): Promise<string[]> {
  // The folder was read first: what left it since must be in the database by now.
  const { rows, provenBelow } = await inDatabase()
  return [...saved.keys()]
    .filter((unit) => !folder.has(unit))
    .filter((unit) => {
      const idx = rows.get(unit)?.idx
      return idx === null || idx === undefined || Number(idx) >= provenBelow
    })
}

async function disagreements(saved: Saved): Promise<string[]> {
  const { rows } = await inDatabase()
  const said: string[] = []
  for (const [unit, codes] of saved) {
    const row = rows.get(unit)
    if (!row) said.push(`${unit}: said to be saved, not recorded`)
    else if (Number(row.n) !== 1) said.push(`${unit}: recorded ${row.n} times`)
    else if (`${row.gain},${row.offset}` !== codes) said.push(`${unit}: other codes than were given out`)
  }
  for (const unit of rows.keys()) if (!saved.has(unit)) said.push(`${unit}: recorded, never said to be saved`)
  return said
}

describe(`R9 with seed ${seed}: ${units} units, ${kills} kills`, () => {
  const saved: Saved = new Map()
  const random = seededRandom(seed)
  const batch = (file: string) => ['batch', file, '--design', 'DBS-A', '--spool', spool, '--format', 'ndjson']
  const note = (line: string) => {
    const { record } = JSON.parse(line) as {
      record?: {
        unit: string
        spooled?: string
        result: { trim: { codes: { gain: number; offset: number } } }
      }
    }
    if (!record?.spooled) return
    const { gain, offset } = record.result.trim.codes
    saved.set(record.unit, `${gain},${offset}`)
  }

  test('killed while writing: what was said to be saved is in the folder', async () => {
    const file = join(home, 'units.ndjson')
    const bodies = Array.from({ length: units }, (_, i) => delivery(i, random, 9).body)
    writeFileSync(file, `${bodies.join('\n')}\n`)
    // Once on line, so that the released revision is kept; then the server is away.
    const one = join(home, 'one.ndjson')
    writeFileSync(one, `${delivery(0, random, 99).body}\n`)
    expect((await run(batch(one), Infinity, () => {})).code).toBe(0)
    await rig.server.kill()
    let done = 0
    for (; done < kills / 2; ) {
      const ran = await run(batch(file), 150 + random.below(900), note)
      if (!ran.killed) break
      done += 1
      if (done % lookEvery !== 0) continue
      const folder = inFolder()
      expect([...saved.keys()].filter((unit) => !folder.has(unit))).toEqual([])
    }
    const last = await run(batch(file), Infinity, note)
    expect(last.code, last.stderr.slice(0, 500)).toBe(0)
    expect(saved.size).toBe(units)
    expect(inFolder().size).toBe(units)
    // A quick disk is done before many kills; without any this has shown nothing.
    expect(done).toBeGreaterThan(0)
  })

  test('negative controls: an entry that is gone, and records that are not there, are found', async () => {
    const folder = inFolder()
    const [some = ''] = folder
    folder.delete(some)
    expect(await lost(saved, folder)).toEqual([some])
    expect(await disagreements(saved)).toHaveLength(units)
  })

  test('killed while sending: nothing is lost or doubled, nothing is let go before its proof', async () => {
    await rig.server.restart()
    let done = 0
    const left = () => ['pending', 'sent'].flatMap((place) => readdirSync(join(spool, place))).length
    for (; done < kills / 2 && left() > 0; ) {
      const ran = await run(['spool', 'send', spool], 150 + random.below(700), () => {})
      if (!ran.killed) expect([0, 20], ran.stderr).toContain(ran.code)
      else done += 1
      if (done % lookEvery === 0) expect(await lost(saved)).toEqual([])
    }
    for (let i = 0; i < 60 && left() > 0; i += 1) {
      const ran = await run(['spool', 'send', spool], Infinity, () => {})
      expect(ran.stderr).not.toMatch(/is not in the ledger/)
      await sleep(200)
    }
    expect(readdirSync(join(spool, 'refused'))).toEqual([])
    expect(left()).toBe(0)
    expect(await disagreements(saved)).toEqual([])
    expect(await lost(saved)).toEqual([])
    expect(done).toBeGreaterThan(0)
  })

  test('negative controls: a record that nobody was told of, and other codes than were told, are seen', async () => {
    const one = [...saved.keys()][0] ?? ''
    const planted = new Map(saved)
    planted.delete(one)
    expect(await disagreements(planted)).toEqual([`${one}: recorded, never said to be saved`])
    planted.set(one, '1,1')
    expect(await disagreements(planted)).toEqual([`${one}: other codes than were given out`])
  })
})

import { spawn } from 'node:child_process'
import { mkdirSync, mkdtempSync, readdirSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { runSeed, seededRandom } from '../support/random.ts'
import { disagreements } from './checker.ts'
import { type Acknowledged, acknowledged, type Delivery, deliver, delivery } from './recording-client.ts'
import { type Rig, startRig } from './rig.ts'
import { type SmallDisk, smallDisk } from './small-disk.ts'

/** R8: a full disk under the database and under a spool: a bounded answer with the right problem, and it heals by itself. */

const seed = runSeed()
const cli = join(import.meta.dirname, '../../dist/cli/ogee.mjs')
const databaseDisk = smallDisk(600)
const spoolDisk = smallDisk(2)
const isDisk = (disk: SmallDisk | { why: string }): disk is SmallDisk => 'path' in disk
let rig: Rig
let home = ''

beforeAll(async () => {
  home = mkdtempSync(join(tmpdir(), 'ogee-full-'))
  rig = await startRig(isDisk(databaseDisk) ? { dir: databaseDisk.path } : {})
})
afterAll(async () => {
  if (isDisk(databaseDisk)) databaseDisk.free()
  await rig.close()
  for (const disk of [databaseDisk, spoolDisk]) if (isDisk(disk)) disk.remove()
  rmSync(home, { recursive: true, force: true })
})

describe(`a full disk under the database (seed ${seed})`, () => {
  test('503 in bounded time, nothing acknowledged is lost, heals by itself', async ({ skip }) => {
    const disk = isDisk(databaseDisk) ? databaseDisk : skip(databaseDisk.why)
    const random = seededRandom(seed)
    const held: Acknowledged[] = []
    let index = 0
    const post = async (item: Delivery) => {
      const response = await fetch(`${rig.server.url}/api/v1/trims`, {
        method: 'POST',
        headers: {
          authorization: `Bearer ${rig.token}`,
          'content-type': 'application/json',
          'idempotency-key': item.key,
        },
        body: item.body,
        // Ten times the aim of three seconds: a guard against hanging.
        signal: AbortSignal.timeout(30_000),
      })
      return {
        status: response.status,
        text: await response.text(),
        retryAfter: response.headers.get('retry-after'),
      }
    }
    disk.fill(1024 * 1024)
    let refusal: Awaited<ReturnType<typeof post>> | null = null
    const waiting: Delivery[] = []
    for (; index < 20_000 && refusal === null; index += 1) {
      const item = delivery(index, random, 8)
      const answer = await post(item)
      if (answer.status === 201) held.push(acknowledged(item.key, item.unit, answer.text))
      else {
        refusal = answer
        waiting.push(item)
      }
    }
    expect(refusal).toMatchObject({ status: 503, retryAfter: '1' })
    expect(JSON.parse(refusal?.text ?? '{}')).toMatchObject({ code: 'database-unavailable' })
    // What is kept can still be read.
    const read = await fetch(`${rig.server.url}/api/v1/trims/${held[0]?.id}`, {
      headers: { authorization: `Bearer ${rig.token}` },
    })
    expect(read.status).toBe(200)
    disk.free()
    const since = performance.now()
    for (const item of waiting) held.push(await deliver(() => rig.server.url, rig.token, item))
    process.stdout.write(
      `R8: database disk full after ${held.length - 1} records; recording again ${((performance.now() - since) / 1000).toFixed(1)} s after there was room\n`,
    )
    for (let i = 0; i < 20; i++)
      held.push(await deliver(() => rig.server.url, rig.token, delivery(index + i, random, 8)))
    await rig.settled()
    const root = await rig.asRoot()
    expect(await disagreements(root, held, 8)).toEqual([])
    await root.end()
  })
})

describe('a full disk under a spool', () => {
  test('74 and no codes on standard output; with room again the same command is taken', async ({ skip }) => {
    const disk = isDisk(spoolDisk) ? spoolDisk : skip(spoolDisk.why)
    const spool = join(disk.path, 'spool')
    const cache = join(home, 'cache')
    mkdirSync(cache, { recursive: true })
    const run = async (unit: string, url: string) => {
      const args = ['trim', '--design', 'DBS-A', '--channel', '1', '--applied', 'neutral', '--unit', unit]
      const child = spawn(process.execPath, [cli, ...args, '--points', '-', '--spool', spool], {
        env: {
          PATH: process.env.PATH ?? '',
          HOME: home,
          XDG_CACHE_HOME: cache,
          OGEE_URL: url,
          OGEE_TOKEN: rig.token,
        },
      })
      const said = { stdout: '', stderr: '' }
      child.stdout.on('data', (piece: Buffer) => (said.stdout += piece.toString()))
      child.stderr.on('data', (piece: Buffer) => (said.stderr += piece.toString()))
      child.stdin.end(
        'code,measured\n0,1.3e-6\n65536,2.4994998\n131072,4.9989783\n196608,7.4984718\n262143,9.9979342\n',
      )
      const code = await new Promise<number | null>((resolve) => child.once('close', resolve))
      return { code, ...said }
    }
    expect((await run('FULL-0', rig.server.url)).code).toBe(0)
    await rig.server.kill()
    try {
      disk.fill(0)
      const full = await run('FULL-1', rig.server.url)
      expect(full.code).toBe(74)
      expect(full.stdout).toBe('')
      expect(full.stderr).toContain('the disk is full')
      expect(readdirSync(join(spool, 'pending'))).toEqual([])
      expect(readdirSync(join(spool, 'parts'))).toEqual([])
      disk.free()
      expect((await run('FULL-1', rig.server.url)).code).toBe(0)
      expect(readdirSync(join(spool, 'pending'))).toHaveLength(1)
    } finally {
      await rig.server.restart()
    }
  })
})

import { once } from 'node:events'
import { copyFileSync, mkdirSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { randomStream } from '../../shared/solver/random/generator.ts'
import { recordOf } from './support/answers.ts'
import { builtCli, examples } from './support/built-cli.ts'
import { FakeServer, json } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const seed = 20_260_302
const tries = 24

beforeAll(async () => {
  await server.start()
  mkdirSync(cli.folder, { recursive: true })
  copyFileSync(join(examples, 'unipolar-18.points.csv'), join(cli.folder, 'points.csv'))
})
afterAll(async () => await server.stop())

/** Keeps one record a key, as the contract says; a slow answer leaves time to be killed on both sides of recording. */
function ledger() {
  const records = new Map<string, unknown>()
  server.willAnswer((seen, response) => {
    const key = seen.key ?? ''
    if (!records.has(key)) records.set(key, recordOf(seen, records.size + 1))
    setTimeout(() => json(201, records.get(key))(seen, response), 60)
  })
  return records
}

test(`L4: killed or interrupted at random points (seed ${seed}), the same command again completes and nothing is doubled`, async () => {
  const records = ledger()
  const random = randomStream(seed, 0)
  const env = { OGEE_URL: server.url, OGEE_TOKEN: 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789' }
  const took = await lifetime(['whoami'])
  let stopped = 0
  for (let i = 0; i < tries; i += 1) {
    const args = ['trim', '--design', 'DBS-A', '--unit', `U${i}`, '--points', 'points.csv']
    const child = cli.start(args, { env })
    const signal = i % 2 === 0 ? 'SIGKILL' : 'SIGINT'
    const exited = once(child, 'exit')
    await sleep(random() * (took + 200))
    child.kill(signal)
    const [code, by] = (await exited) as [number | null, NodeJS.Signals | null]
    if (code !== 0) {
      stopped += 1
      // Ctrl-C before a line of ours runs is the shell's own way to end; afterwards it is 130.
      expect(signal === 'SIGKILL' ? by : (code ?? by)).toBe(signal === 'SIGKILL' ? 'SIGKILL' : (by ?? 130))
    }
    const again = await cli.run(args, { env })
    expect(again.code).toBe(0)
  }
  expect(records.size).toBe(tries)
  // The harness must have hit something, or it shows nothing.
  expect(stopped).toBeGreaterThan(tries / 4)
})

/** How long a whole command lives here, to choose moments within it. */
async function lifetime(args: readonly string[]): Promise<number> {
  const start = performance.now()
  await cli.run(args)
  return performance.now() - start
}

import { afterAll, beforeAll, expect, test } from 'vitest'
import { type Random, runSeed, seededRandom } from '../support/random.ts'
import { type Fate, startProxy, type TcpProxy } from '../support/tcp-proxy.ts'
import { disagreements } from './checker.ts'
import { type Acknowledged, deliver, delivery } from './recording-client.ts'
import { inParallel, type Rig, startRig } from './rig.ts'

/** R2: one effect for each idempotency key, however often, late, out of order and half it arrives. */

const deliveries = Number(process.env.OGEE_DELIVERIES ?? 10_000)
const atOnce = 10_000
/** Many, since one delivery in twenty waits five seconds for an answer that never comes. */
const clients = 96
const seed = runSeed()
let rig: Rig
let proxy: TcpProxy

beforeAll(async () => {
  rig = await startRig()
  const random = seededRandom(seed + 7)
  const fates: Fate[] = ['cut-request', 'cut-answer', 'reset', 'black-hole', 'delay']
  proxy = await startProxy(Number(new URL(rig.server.url).port), random, () =>
    random.next() < 0.25 ? random.pick(fates) : 'pass',
  )
})
afterAll(async () => {
  await proxy.close()
  await rig.close()
})

test(`R2 with seed ${seed}: ${deliveries} deliveries, doubled, shuffled, with lost answers, leave one effect a key`, async () => {
  const random = seededRandom(seed)
  // In rounds, so that what is held and compared at a time stays the same however many there are.
  for (let done = 0, round = 0; done < deliveries; done += atOnce, round += 1) {
    await oneRound(Math.min(atOnce, deliveries - done), round, random)
  }
  // The proxy did harm: otherwise this test has shown nothing.
  for (const fate of ['cut-request', 'cut-answer', 'reset', 'black-hole', 'delay'] as const)
    expect(proxy.fates[fate]).toBeGreaterThan(10)
})

async function oneRound(size: number, round: number, random: Random): Promise<void> {
  const distinct = Math.floor(size * 0.6)
  const items = Array.from({ length: distinct }, (_, i) => delivery(i, random, round))
  const sent = [...items, ...Array.from({ length: size - distinct }, () => random.pick(items))]
  for (let i = sent.length - 1; i > 0; i -= 1) {
    const j = random.below(i + 1)
    ;[sent[i], sent[j]] = [sent[j]!, sent[i]!]
  }
  const acknowledged: Acknowledged[] = []
  await inParallel(sent, clients, async (item) => {
    acknowledged.push(await deliver(() => `http://127.0.0.1:${proxy.port}`, rig.token, item))
  })
  await rig.settled()
  const root = await rig.asRoot()
  expect(await disagreements(root, acknowledged, round)).toEqual([])
  const [count] = await root.query<{ n: bigint }[]>(
    'SELECT COUNT(*) AS n FROM idempotency_keys WHERE idem_key LIKE ?',
    [`fault-${round}-%`],
  )
  await root.end()
  expect(Number(count?.n)).toBe(distinct)
  expect(acknowledged).toHaveLength(size)
}

test('the same key with another body is refused and changes nothing', async () => {
  const random = seededRandom(seed + 3)
  const first = delivery(deliveries + 1, random)
  await deliver(() => rig.server.url, rig.token, first)
  const other = { ...delivery(deliveries + 2, random), key: first.key }
  await expect(deliver(() => rig.server.url, rig.token, other)).rejects.toThrow(
    /422.*idempotency-key-reused/s,
  )
})

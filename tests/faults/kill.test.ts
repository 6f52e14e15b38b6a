import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { runSeed, seededRandom } from '../support/random.ts'
import { disagreements } from './checker.ts'
import { type Acknowledged, deliver, delivery } from './recording-client.ts'
import { inParallel, type Rig, startRig } from './rig.ts'

/** R1: nothing acknowledged is lost or doubled by kill -9 of server, database or both at random moments. */

const kills = Number(process.env.OGEE_KILLS ?? 30)
/** So many are acknowledged between two kills, which the long run counts; the short one kills as fast as it can. */
const acknowledgedAKill = Number(process.env.OGEE_ACKNOWLEDGED_A_KILL ?? 0)
const seed = runSeed()
let rig: Rig

beforeAll(async () => {
  rig = await startRig()
})
afterAll(() => rig.close())

/** Kills at random moments, when enough was acknowledged since the kill before. */
async function killAtRandom(rig: Rig, acknowledged: readonly unknown[]): Promise<void> {
  const random = seededRandom(seed + 1)
  for (let done = 0; done < kills; done += 1) {
    while (acknowledged.length < done * acknowledgedAKill) await sleep(5)
    await sleep(20 + random.below(250))
    const which = random.pick(['server', 'database', 'both'] as const)
    if (which !== 'server') await rig.killDatabase()
    if (which !== 'database') await rig.server.kill()
    if (which !== 'server') await rig.restartDatabase()
    if (which !== 'database') await rig.server.restart()
  }
}

describe(`R1 with seed ${seed}`, () => {
  const acknowledged: Acknowledged[] = []

  test(`${kills} kills under 8 clients with 10 % doubled posts: 0 lost, 0 doubled, replays identical`, async () => {
    const random = seededRandom(seed)
    let killing = true
    const killer = killAtRandom(rig, acknowledged).finally(() => {
      killing = false
    })
    let index = 0
    const clients = Array.from({ length: 8 }, async () => {
      while (killing) {
        index += 1
        const item = delivery(index, random)
        const doubled = random.next() < 0.1
        const answers = await Promise.all(
          Array.from({ length: doubled ? 2 : 1 }, () => deliver(() => rig.server.url, rig.token, item)),
        )
        acknowledged.push(...answers)
      }
    })
    await Promise.all([killer, ...clients])
    // What was acknowledged is acknowledged again in the same words, long after.
    await inParallel(acknowledged.slice(0, 200), 8, async (before) => {
      const again = await deliver(() => rig.server.url, rig.token, {
        ...delivery(0, random),
        ...(await bodyOf(before)),
      })
      expect(again).toEqual(before)
    })
    await rig.settled()
    const root = await rig.asRoot()
    expect(await disagreements(root, acknowledged)).toEqual([])
    await root.end()
    if (process.env.OGEE_TIMES === '1')
      process.stdout.write(`R1: ${kills} kills, ${acknowledged.length} acknowledgements\n`)
    expect(acknowledged.length).toBeGreaterThan(kills)
  })

  test('negative controls: the checker finds a lost, a doubled, a changed and a displaced record', async () => {
    const [first, second, third] = acknowledged
    if (!first || !second || !third) throw new Error('nothing was acknowledged')
    const root = await rig.asRoot()
    const ghost = { ...first, key: 'fault-ghost', id: '00000000-0000-7000-8000-000000000000' }
    expect(await disagreements(root, [ghost])).toContainEqual(expect.stringContaining('not in the database'))
    expect(await disagreements(root, [first, { ...first, id: second.id }])).toContainEqual(
      expect.stringContaining('under several ids'),
    )
    expect(
      await disagreements(root, [
        { ...third, canonical: third.canonical.replace('"channel":"1"', '"channel":"2"') },
      ]),
    ).toContainEqual(expect.stringContaining('not what was acknowledged'))
    await root.query('SET FOREIGN_KEY_CHECKS = 0')
    await root.query('DROP TRIGGER IF EXISTS ledger_entries_no_delete')
    await root.query('DELETE FROM ledger_entries WHERE idx = 3')
    const said = await disagreements(root, [])
    expect(said).toContainEqual(expect.stringContaining('place 3 of the ledger is missing'))
    expect(said).toContainEqual(expect.stringContaining('has no place and is not pending'))
    await root.end()
  })
})

/** The body that was sent, made again from what was acknowledged. */
async function bodyOf({
  key,
  unit,
  canonical,
}: Acknowledged): Promise<{ key: string; unit: string; body: string }> {
  const { points } = JSON.parse(canonical) as { points: unknown }
  return {
    key,
    unit,
    body: JSON.stringify({ design: 'DBS-A', unit, channel: '1', applied: 'neutral', points }),
  }
}

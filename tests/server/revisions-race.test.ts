import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { type Calls, createBy, revisionCalls, titled } from '../support/revision-calls.ts'
import { signIn } from '../support/server-client.ts'
import { addPerson, type Harness, listen, serverHarness } from '../support/server-harness.ts'

/** R7: two at once on one revision, through two servers on one database, as behind a load balancer. */

let harness: Harness
let other: Awaited<ReturnType<typeof listen>>
let calls: [Calls, Calls]
let people: { cookie: string; name: string }[]

beforeAll(async () => {
  harness = await serverHarness()
  other = await listen(harness.deps)
  calls = [revisionCalls(harness.url), revisionCalls(other.url)]
  people = []
  for (const name of ['a', 'b', 'c']) {
    await addPerson(harness, 'engineer', `${name}@example.org`)
    people.push({ name, cookie: await signIn(harness.url, `${name}@example.org`) })
  }
})
afterAll(async () => {
  await other.stop()
  await harness.close()
})

const races = Number(process.env.OGEE_RACES ?? 500)

describe(`ASVS V2.3.4 R7: ${races} races of two writers on one draft`, () => {
  it(
    'one saves, the other hears the current etag and who has it; nothing in between is stored',
    async () => {
      const lanes = 4
      const keys = await Promise.all(
        Array.from({ length: lanes }, async (_, i) => {
          const key = `RACE-${i}`
          return { key, etag: (await createBy(harness.url, people[0]!, key)).etag }
        }),
      )
      await Promise.all(
        keys.map(async (lane) => {
          let current = lane.etag
          for (let i = 0; i < races / lanes; i++) {
            const replies = await Promise.all(
              [0, 1].map((who) =>
                calls[who]!.save(people[who]!, lane.key, 1, current, titled(`${i} by ${who}`)),
              ),
            )
            const winner = replies.findIndex(({ status }) => status === 200)
            expect(replies.map(({ status }) => status).sort(), `race ${i}`).toEqual([200, 412])
            current = replies[winner]!.etag!
            expect(replies[1 - winner]!.body.facts).toMatchObject({ etag: current, state: 'draft' })
            if (i % 25 === 0) {
              const { body } = await calls[0].read(people[0]!, lane.key, 1)
              expect(body).toMatchObject({ title: `${i} by ${winner}`, etag: current })
            }
          }
          expect(current).toBe(`"1.${1 + races / lanes}"`)
        }),
      )
    },
    300_000 + races * 100,
  )
})

describe('two who release at once', () => {
  it('one does; the other hears 409 and who it was; there is one leaf', async () => {
    for (let i = 0; i < 25; i++) {
      const key = `REL-${i}`
      await createBy(harness.url, people[0]!, key)
      const { etag } = await calls[0].submit(people[0]!, key, 1)
      const replies = await Promise.all(
        [1, 2].map((who) => calls[who - 1]!.release(people[who]!, key, 1, etag!)),
      )
      expect(replies.map(({ status }) => status).sort()).toEqual([200, 409])
      const lost = replies.find(({ status }) => status === 409)!
      expect(lost.body).toMatchObject({
        code: 'revision-state',
        facts: { state: 'released', by: 'Test engineer' },
      })
    }
    const counted = await harness.database.sql.rows<{ n: number }>(
      "SELECT COUNT(*) AS n FROM ledger_leaves WHERE kind = 'release'",
    )
    expect(Number(counted[0]!.n)).toBe(25)
  })

  it('a release and a return at once: one of them, whole', async () => {
    for (let i = 0; i < 25; i++) {
      const key = `MIX-${i}`
      await createBy(harness.url, people[0]!, key)
      const { etag } = await calls[0].submit(people[0]!, key, 1)
      const [released, returned] = await Promise.all([
        calls[0].release(people[1]!, key, 1, etag!),
        calls[1].giveBack(people[2]!, key, 1, etag!),
      ])
      expect(new Set([released.status, returned.status])).toEqual(new Set([200, 409]))
      const { body } = await calls[0].read(people[0]!, key, 1)
      expect(body.state).toBe(released.status === 200 ? 'released' : 'draft')
    }
  })
})

import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api, newKey, post } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

/** R8, clock jumps: the server's clock goes wrong and comes back while stations record. */

let scene: Scene
beforeAll(async () => {
  scene = await serverScene()
})
afterAll(() => scene.harness.close())

const hour = 3_600_000

async function inLedger(id: string): Promise<boolean> {
  return (await api(scene.url, 'get', `/trims/${id}`, scene.station)).body.ledger !== null
}
const size = async () => Number((await api(scene.url, 'get', '/ledger/checkpoint')).text.split('\n')[1])

describe('a clock that jumps', () => {
  it.each([
    ['an hour back', -hour],
    ['an hour ahead', hour],
    ['a day back', -24 * hour],
    ['on a leap second’s worth', 1_000],
  ])('%s: recording goes on in order, places and checkpoints follow', async (name, shiftMs) => {
    const { harness, url, station } = scene
    const unit = `Clock ${name}`
    const before = await post(url, station, trimBody({ unit }))
    harness.clock.shiftMs = shiftMs
    try {
      const applied = before.result.trim.codes
      const after = await post(
        url,
        station,
        trimBody({ unit, applied, follows: 'last', points: pointsOf({ gainPpm: 2 }) }),
      )
      expect(after).toMatchObject({ pass: 2, follows: before.id, notices: [] })
      // What the unit has is what came last, whatever the times say.
      const { items } = (await api(url, 'get', `/units?serial=${encodeURIComponent(unit)}`, station)).body
      expect(items[0].current[0]).toMatchObject({ record: after.id, lastRecord: after.id, pass: 2 })
      await expect.poll(() => inLedger(after.id), { timeout: 20_000 }).toBe(true)
      const place = (await api(url, 'get', `/trims/${after.id}`, station)).body.ledger.index
      await expect.poll(size, { timeout: 20_000 }).toBeGreaterThan(place)
      // The same key again is the same record, at any time.
      const key = newKey()
      const body = trimBody({ unit: `${unit} again` })
      const first = await post(url, { ...station, key }, body)
      harness.clock.shiftMs = 0
      expect((await post(url, { ...station, key }, body)).id).toBe(first.id)
    } finally {
      harness.clock.shiftMs = 0
    }
  })
})

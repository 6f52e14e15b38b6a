import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { api, newKey, post } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import { listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

/** R7: two stations on one unit at once, through two servers on one database. */

const races = Number(process.env.OGEE_RACES ?? 500)
let scene: Scene
let second: Awaited<ReturnType<typeof listen>>

beforeAll(async () => {
  scene = await serverScene()
  second = await listen(scene.harness.deps)
})
afterAll(async () => {
  await second.stop()
  await scene.harness.close()
})

type Told = { id: string; pass: number; notices: { code: string; record?: string }[] }

describe(`R7: ${races} races of two stations on one unit`, () => {
  it(
    'both are recorded, one after the other; the second is told of the first, and its codes are the unit’s',
    async () => {
      const { url, station, other } = scene
      const lanes = 4
      await Promise.all(
        Array.from({ length: lanes }, async (_, lane) => {
          for (let i = 0; i < races / lanes; i++) {
            const unit = `R-${lane}-${i}`
            const first = await post(url, station, trimBody({ unit }))
            const applied = first.result.trim.codes
            const again = (gainPpm: number) =>
              trimBody({ unit, applied, follows: first.id, points: pointsOf({ gainPpm }) })
            const replies = await Promise.all([
              api(url, 'post', '/trims', { ...station, key: newKey() }).send(again(3)),
              api(second.url, 'post', '/trims', { ...other, key: newKey() }).send(again(-4)),
            ])
            expect(
              replies.map(({ status }) => status),
              unit,
            ).toEqual([201, 201])
            const told = replies.map(({ body }) => body as Told)
            const loser = told.find(({ notices }) => notices.length > 0)
            const winner = told.find(({ notices }) => notices.length === 0)
            expect(loser?.notices, unit).toMatchObject([{ code: 'newer-record', record: winner?.id }])
            expect(await scene.currentOf(unit)).toMatchObject({ record: loser?.id, lastRecord: loser?.id })
          }
        }),
      )
      const rows = await scene.harness.database.sql.rows<{ n: number }>(
        "SELECT COUNT(*) AS n FROM records WHERE unit LIKE 'R-%'",
      )
      expect(rows[0]?.n).toBe(3 * races)
    },
    300_000 + races * 200,
  )
})

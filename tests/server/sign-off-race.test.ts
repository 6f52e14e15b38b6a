import { afterAll, beforeAll, expect, it, vi } from 'vitest'
import { api, post } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

/** What happens between the counting of a lot's records under its lock and the reading of them. */
let between: (() => Promise<unknown>) | null = null
vi.mock('../../server/commands/lots/board.ts', async (original) => {
  const real = await original<typeof import('../../server/commands/lots/board.ts')>()
  const readBoard: typeof real.readBoard = async (...given) => {
    const act = between
    between = null
    await act?.()
    return real.readBoard(...given)
  }
  return { ...real, readBoard }
})

let scene: Scene
beforeAll(async () => {
  scene = await serverScene()
})
afterAll(() => scene.harness.close())

const open = async (key: string) => {
  const lot = await api(scene.url, 'post', '/lots', scene.engineer).send({ design: 'U18', key })
  expect(lot.status).toBe(201)
}
const etagOf = async (lot: string) =>
  String((await api(scene.url, 'get', `/designs/U18/lots/${lot}`, scene.engineer)).body.etag)
const signOff = (lot: string, etag: string) =>
  api(scene.url, 'post', `/designs/U18/lots/${lot}/sign-off`, {
    ...scene.engineer,
    headers: { 'If-Match': etag },
  }).send({})

it('a lot is not signed off with a withdrawal that came while it was read, which nobody has seen', async () => {
  await open('R-1')
  const unit = 'r-1'
  const first = await post(scene.url, scene.station, trimBody({ lot: 'R-1', unit }))
  await post(scene.url, scene.station, trimBody({ lot: 'R-1', unit: 'r-2' }))
  const etag = await etagOf('R-1')
  const reason = 'The wrong unit was on the bench.'
  between = () =>
    post(scene.url, scene.engineer, { kind: 'withdraw', design: 'U18', unit, follows: first.id, reason })
  const refused = await signOff('R-1', etag)
  expect([refused.status, refused.body.code]).toEqual([412, 'precondition-failed'])
  expect((await signOff('R-1', await etagOf('R-1'))).status).toBe(200)
})

it('nor when as many units are reference units as before, and they are others', async () => {
  await open('R-2')
  for (const unit of ['q-1', 'q-2', 'q-3'])
    await post(scene.url, scene.station, trimBody({ lot: 'R-2', unit }))
  const mark = async (unit: string, reference: boolean) => {
    const reply = await api(scene.url, 'post', '/designs/U18/references', scene.engineer).send({
      unit,
      reference,
    })
    expect(reply.status).toBe(200)
  }
  await mark('q-1', true)
  const etag = await etagOf('R-2')
  await mark('q-1', false)
  await mark('q-2', true)
  expect((await signOff('R-2', etag)).status).toBe(412)
  await mark('q-2', false)
  await mark('q-1', true)
  expect((await signOff('R-2', etag)).status).toBe(200)
})

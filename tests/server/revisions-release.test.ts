import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openLot } from '../../server/commands/lots/open-lot.ts'
import { type Calls, createBy, goodReason, revisionCalls, titled } from '../support/revision-calls.ts'
import { api, post, signIn } from '../support/server-client.ts'
import { trimBody, unipolar } from '../support/server-factories.ts'
import { addPerson, addToken, type Harness, listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
let harness: Harness
let calls: Calls
let author: { cookie: string }
let second: { cookie: string }
let script: { token: string }

beforeAll(async () => {
  scene = await serverScene()
  harness = scene.harness
  calls = revisionCalls(scene.url)
  author = scene.engineer
  await addPerson(harness, 'engineer', 'second@example.org')
  second = { cookie: await signIn(scene.url, 'second@example.org') }
  script = await addToken(harness, ['designs:write'])
})
afterAll(() => harness.close())

const leaves = async (kind: string) =>
  (
    await harness.database.sql.rows<{ body: Buffer }>(
      'SELECT body FROM ledger_leaves WHERE kind = ? ORDER BY id',
      [kind],
    )
  ).map(({ body }) => JSON.parse(body.toString('utf8')) as Record<string, unknown>)

describe('review and release', () => {
  it('a token submits; another engineer releases; the ledger has one leaf, which names the hash', async () => {
    const made = await createBy(scene.url, author, 'LINE')
    const submitted = await calls.submit(script, 'LINE', 1, made.etag)
    expect(submitted).toMatchObject({ status: 200, body: { state: 'in-review', submittedBy: 'Test token' } })
    expect((await calls.release(script, 'LINE', 1)).body).toMatchObject({ code: 'insufficient-scope' })
    expect((await calls.release(scene.operator, 'LINE', 1)).body).toMatchObject({
      code: 'forbidden',
      facts: { administrators: 'Test administrator' },
    })
    expect((await calls.release(second, 'LINE', 1, null)).status).toBe(428)
    expect((await calls.release(second, 'LINE', 1, made.etag)).status).toBe(412)
    const released = await calls.release(second, 'LINE', 1, submitted.etag!)
    expect(released.body).toMatchObject({
      state: 'released',
      releasedByAuthor: false,
      releasedBy: 'Test engineer',
    })
    const mine = (await leaves('release')).filter(({ design }) => design === 'LINE')
    expect(mine).toEqual([
      expect.objectContaining({ revision: 1, hash: released.body.hash, releasedByAuthor: false }),
    ])
    await post(scene.url, scene.station, trimBody({ unit: 'L-1', design: 'LINE' }))
  })

  it('nobody who wrote any of it releases it, and no leaf is left', async () => {
    const made = await createBy(scene.url, author, 'OWN')
    const saved = await calls.save(second, 'OWN', 1, made.etag, titled('By both'))
    await calls.submit(author, 'OWN', 1, saved.etag!)
    for (const who of [author, second]) {
      expect(await calls.release(who, 'OWN', 1)).toMatchObject({
        status: 403,
        body: { code: 'author-cannot-release' },
      })
    }
    expect((await leaves('release')).filter(({ design }) => design === 'OWN')).toEqual([])
    expect((await calls.read(author, 'OWN', 1)).body).toMatchObject({
      state: 'in-review',
      authorMayRelease: false,
    })
  })

  it('where the site allows it the author releases, and revision and leaf say so', async () => {
    await createBy(scene.url, author, 'ALONE')
    await calls.submit(author, 'ALONE', 1)
    const config = { ...harness.deps.config, selfRelease: true }
    const lenient = await listen({ ...harness.deps, config })
    const there = revisionCalls(lenient.url)
    expect((await there.read(author, 'ALONE', 1)).body).toMatchObject({ authorMayRelease: true })
    const released = await there.release(author, 'ALONE', 1)
    await lenient.stop()
    expect(released.body).toMatchObject({ state: 'released', releasedByAuthor: true })
    expect((await leaves('release')).at(-1)).toMatchObject({ design: 'ALONE', releasedByAuthor: true })
    const record = await post(scene.url, scene.station, trimBody({ unit: 'A-1', design: 'ALONE' }))
    expect(record.notices).toMatchObject([{ code: 'released-by-author' }])
  })

  it('goes back to draft with a reason, is edited, and comes again', async () => {
    await createBy(scene.url, author, 'BACK')
    await calls.submit(author, 'BACK', 1)
    expect((await calls.giveBack(second, 'BACK', 1, '*', 'short')).body).toMatchObject({
      code: 'invalid-request',
      errors: [{ path: '/reason' }],
    })
    expect((await calls.giveBack(script, 'BACK', 1)).status).toBe(403)
    const back = await calls.giveBack(second, 'BACK', 1)
    expect(back.body).toMatchObject({ state: 'draft', returnReason: goodReason, returnedBy: 'Test engineer' })
    expect((await calls.read(author, 'BACK', 1)).body.document).toMatchObject({
      title: 'Detector bias source, output A',
    })
    expect((await calls.giveBack(second, 'BACK', 1)).body).toMatchObject({ code: 'revision-state' })
    await calls.save(author, 'BACK', 1, back.etag!, titled('Mended'))
    await calls.submit(author, 'BACK', 1)
    expect((await calls.release(second, 'BACK', 1)).body).toMatchObject({
      state: 'released',
      title: 'Mended',
    })
    expect((await calls.giveBack(second, 'BACK', 1)).body).toMatchObject({ facts: { state: 'released' } })
  })

  it('the same bytes submitted in two designs at once are kept once', async () => {
    const keys = ['SAME-1', 'SAME-2', 'SAME-3', 'SAME-4']
    for (const key of keys) await createBy(scene.url, author, key, titled('The very same'))
    const replies = await Promise.all(keys.map((key) => calls.submit(author, key, 1)))
    expect(replies.map(({ status }) => status)).toEqual([200, 200, 200, 200])
  })
})

describe('withdrawal', () => {
  it('says what still uses the revision, leaves a leaf, and shuts out fresh units', async () => {
    await createBy(scene.url, author, 'USED')
    await calls.submit(author, 'USED', 1)
    await calls.release(second, 'USED', 1)
    for (let i = 1; i <= 7; i++)
      await post(scene.url, scene.station, trimBody({ unit: `W-${i}`, design: 'USED' }))
    await openLot(harness.deps, { design: 'USED', key: 'LOT-1', revision: 1, by: 'tests' })
    await calls.start(author, 'USED', { document: titled('Next') })
    const use = {
      revision: 1,
      lots: 1,
      openLots: { count: 1, first: ['LOT-1'] },
      units: { count: 7, first: ['W-1', 'W-2', 'W-3', 'W-4', 'W-5'] },
    }
    const listed = await api(scene.url, 'get', '/designs/USED/use', author)
    expect(listed.body.items).toEqual([
      use,
      { revision: 2, lots: 0, openLots: { count: 0, first: [] }, units: { count: 0, first: [] } },
    ])
    expect((await api(scene.url, 'get', '/designs/NOWHERE/use', author)).status).toBe(404)

    expect((await calls.withdraw(author, 'USED', 1, '*', 'short')).status).toBe(422)
    expect((await calls.withdraw(author, 'USED', 1, null)).status).toBe(428)
    expect((await calls.withdraw(author, 'USED', 1, '"1.1"')).status).toBe(412)
    expect((await calls.withdraw(author, 'USED', 2)).body).toMatchObject({
      code: 'revision-state',
      facts: { state: 'draft' },
    })
    expect((await calls.withdraw(author, 'USED', 9)).status).toBe(404)
    const gone = await calls.withdraw(author, 'USED', 1)
    expect(gone).toMatchObject({
      status: 200,
      body: { state: 'withdrawn', withdrawReason: goodReason, withdrawnBy: 'Test engineer', use },
    })
    expect((await leaves('withdrawal')).at(-1)).toMatchObject({
      design: 'USED',
      revision: 1,
      reason: goodReason,
      hash: gone.body.hash,
    })
    expect((await calls.withdraw(author, 'USED', 1)).body).toMatchObject({
      code: 'revision-state',
      facts: { state: 'withdrawn' },
    })
    expect(
      await post(scene.url, scene.station, trimBody({ unit: 'W-8', design: 'USED' }), 422),
    ).toMatchObject({ code: 'revision-withdrawn' })
    expect((await calls.read(author, 'USED', 'released')).status).toBe(404)
  })
})

describe('the difference between two revisions', () => {
  it('is in words and numbers, with the effect on the answer', async () => {
    const budget = {
      gain: [{ name: 'Reference', limitPpm: 250, distribution: 'rectangular', when: 'initial' }],
      offset: [],
    }
    await createBy(scene.url, author, 'DIFF', unipolar({ budget }))
    const wider = { gain: [{ ...budget.gain[0]!, limitPpm: 2500 }], offset: [] }
    await calls.start(author, 'DIFF', { document: unipolar({ budget: wider }) })
    const reply = await api(scene.url, 'get', '/designs/DIFF/revisions/1/difference?to=2', script)
    expect(reply.status).toBe(200)
    expect(reply.body).toMatchObject({
      format: 'ogee.difference/1',
      design: 'DIFF',
      before: { number: 1 },
      after: { number: 2 },
      changes: [{ path: '/budget/gain/0/limitPpm', before: '250 ppm', after: '2500 ppm' }],
      effects: [{ range: 'u10', before: { sized: true }, after: { sized: true } }],
    })
    expect((await api(scene.url, 'get', '/designs/DIFF/revisions/1/difference?to=9', author)).status).toBe(
      404,
    )
    expect((await api(scene.url, 'get', '/designs/DIFF/revisions/1/difference', author)).status).toBe(422)
    expect(
      (await api(scene.url, 'get', '/designs/DIFF/revisions/released/difference?to=2', author)).status,
    ).toBe(404)
    expect(
      (await api(scene.url, 'get', '/designs/U18/revisions/released/difference?to=1', author)).body.changes,
    ).toEqual([])
  })
})

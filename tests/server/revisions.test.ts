import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { sha256 } from '../../server/ledger/crypto.ts'
import { canonicalBytes } from '../../shared/ledger/canonical.ts'
import { type Calls, createBy, revisionCalls, titled } from '../support/revision-calls.ts'
import { api, signIn } from '../support/server-client.ts'
import { unipolar } from '../support/server-factories.ts'
import { addPerson, addToken, type Harness } from '../support/server-harness.ts'
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

describe('a draft', () => {
  it('is read with its etag, saved with If-Match, and says who saved it and when', async () => {
    const made = await createBy(scene.url, author, 'SAVE')
    const read = await calls.read(author, 'SAVE', 1)
    expect([read.status, read.etag]).toEqual([200, made.etag])
    const saved = await calls.save(second, 'SAVE', 1, made.etag, titled('Saved once'))
    expect(saved.status).toBe(200)
    expect(saved.body).toMatchObject({
      title: 'Saved once',
      author: made.author,
      state: 'draft',
      key: 'SAVE',
    })
    expect(saved.body.etag).toBe(saved.etag)
    expect(saved.etag).not.toBe(made.etag)
    expect(saved.body.writers).toHaveLength(2)
    const again = await calls.read(author, 'SAVE', 1)
    expect(again.body).toMatchObject({ document: { title: 'Saved once' }, etag: saved.etag })
    const bytes = Buffer.from(again.body.bytes as string, 'base64')
    expect(bytes.equals(canonicalBytes(titled('Saved once')))).toBe(true)
    expect(Buffer.from(sha256(bytes)).toString('hex')).toBe(again.body.hash)
  })

  it('428 without If-Match, 412 with an old one: who saved, when, and the etag now', async () => {
    const made = await createBy(scene.url, author, 'STALE')
    expect(await calls.save(author, 'STALE', 1, null, titled('x'))).toMatchObject({
      status: 428,
      body: { code: 'precondition-required' },
    })
    const first = await calls.save(second, 'STALE', 1, made.etag, titled('Second was first'))
    const lost = await calls.save(author, 'STALE', 1, made.etag, titled('Too late'))
    expect(lost).toMatchObject({
      status: 412,
      body: { code: 'precondition-failed', facts: { state: 'draft', by: 'Test engineer', etag: first.etag } },
    })
    expect(Date.parse((lost.body.facts as { at: string }).at)).toBeGreaterThan(Date.now() - 60_000)
    expect((await calls.read(author, 'STALE', 1)).body.title).toBe('Second was first')
    expect((await calls.save(author, 'STALE', 1, first.etag!, titled('Now'))).status).toBe(200)
  })

  it.each([
    ['*', 200],
    ['"9.9", ETAG', 200],
    ['W/ETAG', 412],
    ['"9.9"', 412],
    ['nonsense', 412],
  ])('If-Match %s gives %i (RFC 9110, 13.1.1)', async (given, status) => {
    const key = `MATCH-${Math.random().toString(36).slice(2, 8)}`
    const { etag } = await createBy(scene.url, author, key)
    const saved = await calls.save(author, key, 1, given.replace('ETAG', etag), titled(given))
    expect(saved.status).toBe(status)
  })

  it('saving what is stored changes nothing and does no harm, so that a retry may be made', async () => {
    const made = await createBy(scene.url, author, 'RETRY')
    const saved = await calls.save(author, 'RETRY', 1, made.etag, titled('Once'))
    const again = await calls.save(author, 'RETRY', 1, made.etag, titled('Once'))
    expect([again.status, again.body]).toEqual([200, saved.body])
  })

  it('422 by pointer when the document is none; 404 where there is none; 409 once it is no draft', async () => {
    const made = await createBy(scene.url, author, 'WRONG')
    const bad = await calls.save(author, 'WRONG', 1, made.etag, { ...(unipolar() as object), title: '' })
    expect(bad).toMatchObject({ status: 422, body: { errors: [{ path: '/document/title' }] } })
    expect((await calls.save(author, 'WRONG', 2, '*', unipolar())).status).toBe(404)
    expect((await calls.save(author, 'NOWHERE', 1, '*', unipolar())).status).toBe(404)
    await calls.submit(author, 'WRONG', 1, made.etag)
    expect(await calls.save(author, 'WRONG', 1, '*', titled('x'))).toMatchObject({
      status: 409,
      body: { code: 'revision-state', facts: { state: 'in-review', by: 'Test engineer' } },
    })
  })
})

describe('the next draft', () => {
  it('is a copy of the highest released, of the one named, or a document of its own', async () => {
    const copy = await calls.start(author, 'U18', {})
    expect(copy).toMatchObject({ status: 201, body: { number: 2, state: 'draft', basedOn: 1, key: 'U18' } })
    expect(copy.body.hash).toBe((await calls.read(author, 'U18', 1)).body.hash)
    const own = await calls.start(script, 'U18', { document: titled('Own') })
    expect(own.body).toMatchObject({ number: 3, basedOn: null, title: 'Own', writers: [{ kind: 'token' }] })
    const named = await calls.start(author, 'U18', { from: 3, document: titled('From 3') })
    expect(named.body).toMatchObject({ number: 4, basedOn: 3 })
    expect((await calls.start(author, 'U18', { from: 99 })).body).toMatchObject({ code: 'not-found' })
    expect((await calls.start(author, 'NOWHERE', {})).status).toBe(404)
  })

  it('is made once: a retry, and two people at the same time, get the same one', async () => {
    await createBy(scene.url, author, 'TWINS')
    const made = await Promise.all(
      [author, second, author, second].map((who) => calls.start(who, 'TWINS', { document: titled('Twin') })),
    )
    expect(new Set(made.map(({ body }) => body.number))).toEqual(new Set([2]))
    const others = await Promise.all(
      ['a', 'b', 'c'].map((title) => calls.start(author, 'TWINS', { document: titled(title) })),
    )
    expect(others.map(({ body }) => body.number).sort()).toEqual([3, 4, 5])
  })

  it('of a copied design says where it comes from', async () => {
    const body = { key: 'COPY', document: unipolar(), copiedFrom: { design: 'U18', revision: 1 } }
    const made = await api(scene.url, 'post', '/designs', author).send(body)
    expect([made.status, made.body.copiedFrom]).toEqual([201, { design: 'U18', revision: 1 }])
    const unknown = { ...body, key: 'COPY-2', copiedFrom: { design: 'U18', revision: 99 } }
    const refused = await api(scene.url, 'post', '/designs', author).send(unknown)
    expect(refused.body).toMatchObject({ code: 'not-found', errors: [{ path: '/copiedFrom' }] })
    expect((await api(scene.url, 'get', '/designs/COPY-2', author)).status).toBe(404)
  })
})

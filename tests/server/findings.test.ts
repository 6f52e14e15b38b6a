import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { answerFinding } from '../../server/commands/findings/answer-finding.ts'
import { sha256 } from '../../server/ledger/crypto.ts'
import type { Finding } from '../../shared/contract/findings.ts'
import { canonicalText } from '../../shared/ledger/canonical.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import { addPerson } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
let auditor: { cookie: string }
let record: { id: string; number: number }
const text = 'The note gives 30 min of warm-up; the procedure asks 45.'

beforeAll(async () => {
  scene = await serverScene()
  await addPerson(scene.harness, 'auditor')
  auditor = { cookie: await signIn(scene.url, 'auditor@example.org') }
  const { engineer } = scene
  const opened = await api(scene.url, 'post', '/lots', engineer).send({ design: 'U18', key: 'L1' })
  expect(opened.status, JSON.stringify(opened.body)).toBe(201)
  record = await post(scene.url, scene.station, trimBody({ unit: 'F-1', lot: 'L1' }))
})
afterAll(() => scene.harness.close())

const send = (path: string, body: object, as: object, key = newKey()) =>
  api(scene.url, 'post', path, { ...as, key }).send(body)
const onRecord = () => ({ subject: { kind: 'record', record: record.id }, text })
const list = async (query: string) =>
  (await api(scene.url, 'get', `/findings?${query}`, scene.operator)).body.items as Finding[]

async function write(body: object = onRecord()): Promise<Finding> {
  const reply = await send('/findings', body, auditor)
  expect(reply.status, JSON.stringify(reply.body)).toBe(201)
  return reply.body
}

describe('a finding', () => {
  it('is written by an auditor, answered by an engineer, closed by the auditor', async () => {
    const finding = await write()
    expect(finding).toMatchObject({
      subject: { kind: 'record', record: record.id, number: record.number, unit: 'F-1' },
      text,
      by: { name: 'Test auditor' },
      state: 'open',
      answers: [],
    })
    const answered = await send(
      `/findings/${finding.id}/answers`,
      { text: 'Readings show it had settled.' },
      scene.engineer,
    )
    expect([answered.status, answered.body.state]).toEqual([201, 'answered'])
    const closing = await send(
      `/findings/${finding.id}/closing`,
      { text: 'Accepted; the procedure changes.' },
      auditor,
    )
    expect(closing.body).toMatchObject({
      state: 'closed',
      answers: [
        { act: 'answer', text: 'Readings show it had settled.', by: { name: 'Test engineer' } },
        { act: 'close', text: 'Accepted; the procedure changes.', by: { name: 'Test auditor' } },
      ],
    })
    for (const [path, who] of [
      ['answers', scene.engineer],
      ['closing', auditor],
    ] as const) {
      const late = await send(`/findings/${finding.id}/${path}`, { text: 'One more thing to say.' }, who)
      expect([late.status, late.body.code]).toEqual([409, 'finding-closed'])
    }
  })

  it('stands in the ledger word for word, as do its answers', async () => {
    const finding = await write()
    await send(`/findings/${finding.id}/answers`, { text: 'Readings show it had settled.' }, scene.engineer)
    await scene.harness.sequencer.drain()
    const rows = await scene.harness.database.sql.rows<{
      kind: 'finding' | 'answer'
      at: Date
      body: Buffer
      hash: Buffer
      idx: number | null
    }>(
      `SELECT l.kind, l.at, l.body, l.hash, e.idx FROM ledger_leaves l LEFT JOIN ledger_entries e ON e.leaf_id = l.id
        WHERE l.kind IN ('finding', 'answer') ORDER BY l.id DESC LIMIT 2`,
    )
    const [answer, found] = rows.map(({ kind, at, body, hash, idx }) => {
      expect(idx).not.toBeNull()
      expect(leafHash(sha256, leafBytes(kind, at.toISOString(), body))).toEqual(hash)
      const parsed = JSON.parse(body.toString('utf8'))
      expect(canonicalText(parsed)).toBe(body.toString('utf8'))
      return { ...parsed, hash: hash.toString('hex') }
    })
    expect(found).toMatchObject({
      format: 'ogee.finding/1',
      id: finding.id,
      text,
      subject: { kind: 'record', record: record.id },
    })
    expect(found.hash).toBe(finding.leaf)
    expect(answer).toMatchObject({
      format: 'ogee.answer/1',
      finding: finding.id,
      act: 'answer',
      by: { name: 'Test engineer' },
    })
  })

  it('on a lot comes with each record of the lot, and only there', async () => {
    const finding = await write({ subject: { kind: 'lot', design: 'U18', lot: 'L1' }, text })
    expect((await list(`record=${record.id}`)).map(({ id }) => id)).toContain(finding.id)
    const other = await post(scene.url, scene.station, trimBody({ unit: 'F-2' }))
    expect(await list(`record=${other.id}`)).toEqual([])
    expect((await list('design=U18&lot=L1&state=open')).map(({ id }) => id)).toContain(finding.id)
  })

  it.each([
    [
      'a record that is not there',
      { subject: { kind: 'record', record: '01a230b2-a46d-7315-89af-a51980fdfb2a' }, text },
      404,
    ],
    ['a lot that is not there', { subject: { kind: 'lot', design: 'U18', lot: 'L9' }, text }, 404],
    ['too few words', { subject: { kind: 'lot', design: 'U18', lot: 'L1' }, text: '  short   ' }, 422],
  ])('is refused on %s', async (_, body, status) => {
    expect((await send('/findings', body, auditor)).status).toBe(status)
  })
})

describe('a finding is kept once and for good', () => {
  it('whatever is repeated: the same key gives the same finding, other words under it are refused', async () => {
    const key = newKey()
    const replies = await Promise.all(
      Array.from({ length: 6 }, () => send('/findings', onRecord(), auditor, key)),
    )
    expect(replies.map((reply) => reply.status)).toEqual(Array(6).fill(201))
    expect(new Set(replies.map((reply) => reply.body.id)).size).toBe(1)
    const other = await send('/findings', { ...onRecord(), text: 'Something else entirely.' }, auditor, key)
    expect([other.status, other.body.code]).toEqual([422, 'idempotency-key-reused'])
    const { id } = replies[0]!.body
    expect((await list(`record=${record.id}`)).filter((one) => one.id === id)).toHaveLength(1)
  })

  it('is closed once, by whoever was first', async () => {
    const finding = await write()
    const replies = await Promise.all(
      Array.from({ length: 6 }, (_, i) =>
        send(`/findings/${finding.id}/closing`, { text: `Closed, said ${i} of six.` }, auditor),
      ),
    )
    expect(replies.map((reply) => reply.status).sort()).toEqual([201, 409, 409, 409, 409, 409])
    const [leaves] = await scene.harness.database.sql.rows<{ n: number }>(
      "SELECT COUNT(*) AS n FROM ledger_leaves WHERE kind = 'answer' AND body LIKE ?",
      [`%${finding.id}%`],
    )
    expect(leaves?.n).toBe(1)
  })

  it.each([
    ['a record', () => onRecord()],
    ['a lot', () => ({ subject: { kind: 'lot', design: 'U18', lot: 'L1' }, text })],
  ])('takes no answer after its closing, whoever is first: on %s (15 rounds)', async (_, subject) => {
    for (let round = 0; round < 15; round++) {
      const finding = await write(subject())
      const say = (path: string, as: object) =>
        send(`/findings/${finding.id}/${path}`, { text: 'Said at the same moment.' }, as)
      const replies = await Promise.all([
        say('closing', auditor),
        ...Array.from({ length: 4 }, () => say('answers', scene.engineer)),
      ])
      const acts = await scene.harness.database.sql.rows<{ body: Buffer }>(
        "SELECT body FROM ledger_leaves WHERE kind = 'answer' AND body LIKE ? ORDER BY id",
        [`%${finding.id}%`],
      )
      expect(JSON.parse(String(acts.at(-1)!.body)).act).toBe('close')
      expect(replies.filter((reply) => reply.status === 201)).toHaveLength(acts.length)
    }
  })

  it('is closed by a closing whose COMMIT took effect and whose answer was lost', async () => {
    const finding = await write()
    const { database, deps } = scene.harness
    const { sequelize } = database
    let begun = 0
    const begin = async () => {
      const open = await sequelize.transaction()
      const commit = open.commit.bind(open)
      if (++begun === 1) {
        open.commit = async () => {
          await commit()
          throw Object.assign(new Error('The connection is gone.'), { code: 'ECONNRESET' })
        }
      }
      return open
    }
    const flaky = Object.create(sequelize, { transaction: { value: begin } }) as typeof sequelize
    const closed = await answerFinding(
      { ...deps, database: { ...database, sequelize: flaky } },
      {
        finding: finding.id,
        act: 'close',
        text: 'Seen and understood.',
        by: { id: 'a', name: 'A' },
        key: newKey(),
      },
    )
    expect(begun).toBe(2)
    expect(closed).toMatchObject({ state: 'closed', answers: [{ act: 'close' }] })
  })

  it('a key that answered another finding is refused for what it is', async () => {
    const [one, two] = [await write(), await write()]
    const key = newKey()
    const body = { text: 'Readings show it had settled.' }
    expect((await send(`/findings/${one.id}/answers`, body, scene.engineer, key)).status).toBe(201)
    const other = await send(`/findings/${two.id}/answers`, body, scene.engineer, key)
    expect([other.status, other.body.code]).toEqual([422, 'idempotency-key-reused'])
  })

  it.each(['findings', 'finding_answers'])(
    '%s refuses UPDATE and DELETE to the account and to root',
    async (table) => {
      const denied = { parent: { errno: 1142 } }
      await expect(scene.harness.database.sql.run(`UPDATE ${table} SET by_id = 'x'`)).rejects.toMatchObject(
        denied,
      )
      await expect(scene.harness.database.sql.run(`DELETE FROM ${table}`)).rejects.toMatchObject(denied)
      const root = await scene.harness.test.asRoot()
      const refused = { errno: 1644, sqlState: '45000' }
      await expect(root.query(`UPDATE ${table} SET by_id = 'x'`)).rejects.toMatchObject(refused)
      await expect(root.query(`DELETE FROM ${table}`)).rejects.toMatchObject(refused)
      await root.end()
    },
  )
})

describe('where findings are seen', () => {
  it('History marks and finds their records; the record says so until it is closed, and its bytes stay', async () => {
    const { id } = await post(scene.url, scene.station, trimBody({ unit: 'F-3' }))
    const get = async (path: string) => (await api(scene.url, 'get', path, auditor)).body
    const before = await get(`/trims/${id}`)
    const finding = await write({ subject: { kind: 'record', record: id }, text })
    expect((await get('/trims?finding=open&unit=F-3')).items).toMatchObject([{ id, finding: 'open' }])
    const during = await get(`/trims/${id}`)
    expect(during.notices.map((notice: { code: string }) => notice.code)).toEqual(['finding-open'])
    await send(`/findings/${finding.id}/closing`, { text: 'Seen and understood.' }, auditor)
    const after = await get(`/trims/${id}`)
    const { ledger: _, ...rest } = after
    expect(rest).toEqual({ ...before, ledger: undefined })
    expect((await get('/trims?finding=open&unit=F-3')).items).toEqual([])
    expect((await get('/trims?finding=any&unit=F-3')).items).toMatchObject([{ id, finding: 'closed' }])
    expect((await get('/history/count?finding=any&unit=F-3')).count).toBe(1)
  })

  it('in pages, newest first', async () => {
    const all = await list('limit=100')
    expect(all.length).toBeGreaterThan(4)
    const ids: string[] = []
    let next: string | null = null
    do {
      const page: { items: Finding[]; next: string | null } = (
        await api(scene.url, 'get', `/findings?limit=2${next ? `&after=${next}` : ''}`, auditor)
      ).body
      ids.push(...page.items.map((item) => item.id))
      next = page.next
    } while (next !== null)
    expect(ids).toEqual(all.map(({ id }) => id))
    expect(all.map(({ at }) => at)).toEqual(all.map(({ at }) => at).sort((a, b) => (a < b ? 1 : -1)))
  })
})

import { afterAll, beforeAll, expect, it } from 'vitest'
import { sha256 } from '../../server/ledger/crypto.ts'
import { type Design, designDocument } from '../../shared/contract/design.ts'
import { type RecordBody, recordBody, type Record as TrimRecord } from '../../shared/contract/record.ts'
import { canonicalText } from '../../shared/ledger/canonical.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { codesOn } from '../../shared/solver/codes.ts'
import { prepareTrim } from '../../shared/solver/prepare-trim.ts'
import { recompute } from '../../src/screens/record/recompute.ts'
import { mth } from '../shared/ledger/reference-tree.ts'
import { fillHarness } from '../support/filled.ts'
import { api, signIn } from '../support/server-client.ts'
import { addPerson, type Harness, serverHarness } from '../support/server-harness.ts'

/** What benches and tamper tests fill a database with is what the product itself would have written. */

const count = 3_000
let harness: Harness
let auditor: { cookie: string }

beforeAll(async () => {
  harness = await serverHarness()
  await fillHarness(harness, count, 7)
  await addPerson(harness, 'auditor')
  auditor = { cookie: await signIn(harness.url, 'auditor@example.org') }
})
afterAll(() => harness.close())

type Leaf = { idx: number; kind: 'record'; at: Date; hash: Buffer; body: Buffer }
const leaves = () =>
  harness.database.sql.rows<Leaf>(
    'SELECT e.idx, l.kind, l.at, l.hash, l.body FROM ledger_entries e JOIN ledger_leaves l ON l.id = e.leaf_id ORDER BY e.idx',
  )

it('gives every leaf its hash and place, and signs the root that a slow reference finds', async () => {
  await harness.sequencer.drain()
  const all = await leaves()
  expect(all.length).toBeGreaterThanOrEqual(count)
  for (const [i, { idx, kind, at, hash, body }] of all.entries()) {
    expect(idx).toBe(i)
    expect(Buffer.from(leafHash(sha256, leafBytes(kind, at.toISOString(), body))).equals(hash)).toBe(true)
  }
  const [head] = await harness.database.sql.rows<{ size: number }>('SELECT size FROM ledger_head')
  expect(head?.size).toBe(all.length)
  const [signed] = await harness.database.sql.rows<{ size: number; root: Buffer }>(
    'SELECT size, root FROM ledger_checkpoints ORDER BY number DESC LIMIT 1',
  )
  const below = all.slice(0, signed?.size)
  expect(below.length).toBeGreaterThanOrEqual(count)
  const root = mth(below.map(({ kind, at, body }) => leafBytes(kind, at.toISOString(), body)))
  expect(signed?.root.equals(root)).toBe(true)
})

it('writes records that are canonical, of the contract, and that the solver computes again bit for bit', async () => {
  const bodies = (await leaves()).filter(({ kind }) => kind === 'record').slice(-count)
  const { document } = (await api(harness.url, 'get', '/designs/DBS-A/revisions/1', auditor)).body
  const channel = prepareTrim(designDocument.parse(document))
  let compared = 0
  for (const { body } of bodies) {
    const text = body.toString('utf8')
    const parsed = JSON.parse(text) as RecordBody
    expect(text.length).toBeLessThan(4_096)
    expect(canonicalText(parsed as never)).toBe(text)
    recordBody.parse(parsed)
    if (parsed.design !== 'DBS-A' || parsed.kind !== 'trim' || parsed.effects !== 'design') continue
    const options = parsed.instrument ? { instrument: parsed.instrument } : {}
    const again = codesOn(channel, parsed.points!, { ...options, applied: parsed.applied! })
    expect(canonicalText(again as never)).toBe(canonicalText(parsed.result as never))
    compared += 1
  }
  expect(compared).toBeGreaterThan(100)
})

it('has records whose effects were learned, which the record page computes again bit for bit from their chains', async () => {
  const bodies = (await leaves())
    .filter(({ kind }) => kind === 'record')
    .map(({ body }) => JSON.parse(body.toString('utf8')) as TrimRecord)
  const byId = new Map(bodies.map((body) => [body.id, body]))
  const designs = new Map<string, Design>()
  for (const key of ['DBS-A', 'DBC-16']) {
    const { document } = (await api(harness.url, 'get', `/designs/${key}/revisions/1`, auditor)).body
    designs.set(key, designDocument.parse(document))
  }
  const learned = bodies.filter(({ effects }) => effects === 'learned')
  expect(learned.length).toBeGreaterThan(20)
  for (const record of learned) {
    const chain: TrimRecord[] = []
    for (let at = record.follows; at !== null; at = chain[0]!.follows) chain.unshift(byId.get(at)!)
    const again = recompute(record, designs.get(record.design)!, chain)
    if (again.is !== 'done') throw new Error(again.why)
    for (const row of again.rows) expect(row.now, `${record.number} ${row.name}`).toBe(row.stored)
  }
})

it('leaves units as recording would: a page reads, and the next record goes on from them', async () => {
  const page = (await api(harness.url, 'get', '/trims?kind=verify&limit=50', auditor)).body
  expect(page.items).toHaveLength(50)
  const line = page.items.find((item: { design: string }) => item.design === 'DBS-A')
  const unit = (await api(harness.url, 'get', `/units?serial=${line.unit}&design=DBS-A`, auditor)).body
    .items[0]
  expect(unit.current).not.toEqual([])
  const record = (await api(harness.url, 'get', `/trims/${line.id}`, auditor)).body
  expect(record.ledger.index).toBeGreaterThan(0)
})

import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Sql } from '../../server/db/sql.ts'
import { transaction } from '../../server/db/transaction.ts'
import { sha256, verifyEd25519 } from '../../server/ledger/crypto.ts'
import { insertLeaves, newLeaf } from '../../server/ledger/leaves.ts'
import { proveRecord } from '../../server/ledger/prove.ts'
import { sequencePass } from '../../server/ledger/sequence.ts'
import type { ConsistencyProof } from '../../shared/contract/proof.ts'
import { canonicalText } from '../../shared/ledger/canonical.ts'
import { checkProof } from '../../shared/ledger/check-proof.ts'
import { checkCheckpoint, parseVerifierKey } from '../../shared/ledger/checkpoint.ts'
import { checkConsistency } from '../../shared/ledger/consistency.ts'
import { fromHex } from '../../shared/ledger/hash.ts'
import { api, post } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import { addStation, addToken } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

const crypto = { sha256, verify: verifyEd25519 }
let scene: Scene

beforeAll(async () => {
  scene = await serverScene()
})
afterAll(() => scene.harness.close())

const text = async (path: string) => (await api(scene.url, 'get', path)).text
const key = async () => parseVerifierKey(sha256, await text('/ledger/key'))!
const newest = async () =>
  checkCheckpoint(sha256, await text('/ledger/checkpoint'), await key(), verifyEd25519)!

/** The proof, once a checkpoint covers the record. */
async function proofOf(id: string, as: { token?: string; cookie?: string } = scene.station) {
  const deadline = Date.now() + 20_000
  for (;;) {
    const reply = await api(scene.url, 'get', `/ledger/proof/${id}`, as)
    if (reply.status !== 409 || Date.now() > deadline) return reply
    expect(reply.body).toMatchObject({ code: 'not-in-ledger-yet', facts: { retryAfterSeconds: 1 } })
    expect(reply.headers['retry-after']).toBe('1')
    await scene.harness.sequencer.drain()
    await new Promise((resolve) => setTimeout(resolve, 100))
  }
}

describe('GET /ledger/proof/:recordId', () => {
  it('gives a file that checks with the key alone and holds exactly what was answered', async () => {
    const record = await post(scene.url, scene.station, trimBody({ unit: 'P-1' }))
    const { receipt, ledger: _, notices: __, ...body } = record
    const proof = (await proofOf(record.id)).body
    const checked = checkProof(crypto, proof, await key())
    expect(checked).toMatchObject({ ok: true, recordId: record.id, record: canonicalText(body) })
    expect(proof.leaf).toBe(receipt.leaf)
    const again = (await api(scene.url, 'get', `/trims/${record.id}`, scene.station)).body
    expect(again.ledger).toEqual({ index: proof.index })
  })

  it('is open to who may read the record, and to who reads the ledger', async () => {
    const record = await post(scene.url, scene.station, trimBody({ unit: 'P-2' }))
    expect((await proofOf(record.id)).status).toBe(200)
    const station = await addStation(scene.harness, 'Elsewhere')
    const as = async (scope: 'trims:read' | 'trims:read-all' | 'ledger:read', designs?: string[]) => {
      const { token } = await addToken(scene.harness, [scope], station.id, designs ? { designs } : {})
      const { status } = await proofOf(record.id, { token })
      await scene.harness.database.sql.run(
        'UPDATE tokens SET revoked_at = NOW(3) WHERE revoked_at IS NULL AND station_id = ?',
        [station.id],
      )
      return status
    }
    expect(await as('trims:read')).toBe(404)
    expect(await as('trims:read-all')).toBe(200)
    expect(await as('ledger:read')).toBe(200)
    expect(await as('ledger:read', ['TWO'])).toBe(404)
    expect((await proofOf(record.id, scene.operator)).status).toBe(200)
    expect((await api(scene.url, 'get', `/ledger/proof/${record.id}`)).status).toBe(401)
    expect((await proofOf('01a230b2-a46d-7315-89af-a51980fdfb2a')).status).toBe(404)
  })
})

describe('GET /ledger/consistency', () => {
  const between = (from: number, to?: number) =>
    api(scene.url, 'get', `/ledger/consistency?from=${from}${to === undefined ? '' : `&to=${to}`}`)

  it('proves every size against the newest checkpoint, without sign-in', async () => {
    await proofOf((await post(scene.url, scene.station, trimBody({ unit: 'C-1' }))).id)
    const { size, root } = await newest()
    expect(size).toBeGreaterThan(8)
    for (let from = 1; from <= size; from++) {
      const reply = await between(from)
      expect(reply.status).toBe(200)
      const proof = reply.body as ConsistencyProof
      const older = { size: from, root: fromHex(proof.from.root)! }
      const path = proof.path.map((hash) => fromHex(hash)!)
      expect(checkConsistency(sha256, older, { size, root }, path), `${from} to ${size}`).toBe(true)
      if (from === size) continue
      const other = { ...older, root: sha256(older.root) }
      expect(checkConsistency(sha256, other, { size, root }, path)).toBe(false)
    }
  })

  it('gives the roots that were signed', async () => {
    const rows = await scene.harness.database.sql.rows<{ size: number; root: Buffer }>(
      'SELECT size, root FROM ledger_checkpoints WHERE size > 0',
    )
    expect(rows.length).toBeGreaterThan(0)
    for (const { size, root } of rows) {
      expect((await between(size)).body.from).toEqual({ size, root: root.toString('hex') })
    }
  })

  it('refuses sizes that are not there, by name', async () => {
    const { size } = await newest()
    for (const [from, to, path] of [
      [0, undefined, '/from'],
      [size + 1, undefined, '/from'],
      [2, 1, '/from'],
      [1, size + 1_000, '/to'],
    ] as const) {
      const reply = await between(from, to)
      expect(reply.status, `${from} ${to}`).toBe(422)
      expect(reply.body.errors[0].path).toBe(path)
    }
  })
})

describe('what a proof costs', () => {
  it('is a fixed number of look-ups and O(log n) rows, whatever the size', async () => {
    const { database, deps, sequencer } = scene.harness
    const record = await post(scene.url, scene.station, trimBody({ unit: 'O-1' }))
    await sequencer.stop()
    const costs: { statements: number; rows: number; size: number }[] = []
    let clock = Date.now()
    for (const more of [0, 300, 2_000]) {
      const leaves = Array.from({ length: more }, (_, i) =>
        newLeaf('token', new Date().toISOString(), { format: 'ogee.test/1', more, i }),
      )
      await transaction(database, (sql) => insertLeaves(sql, leaves))
      const later = () => {
        clock += 5_000
        return new Date(clock)
      }
      while ((await sequencePass(database, deps.signer, later)).more);
      const cost = { statements: 0, rows: 0, size: 0 }
      const counted: Sql = {
        ...database.sql,
        rows: async <Row extends object>(...asked: Parameters<Sql['rows']>) => {
          const rows = await database.sql.rows<Row>(...asked)
          cost.statements++
          cost.rows += rows.length
          return rows
        },
      }
      const proof = await proveRecord(counted, record.id)
      expect(checkProof(crypto, proof, deps.signer.key)).toMatchObject({ ok: true })
      cost.size = Number(proof.checkpoint.split('\n')[1])
      costs.push(cost)
    }
    expect(costs.at(-1)!.size).toBeGreaterThan(2_300)
    for (const { statements, rows, size } of costs) {
      expect(statements).toBe(costs[0]!.statements)
      // Record, checkpoint and keys; a hash a level, and as many for the ragged right side.
      expect(rows).toBeLessThanOrEqual(4 + 2 * Math.ceil(Math.log2(size)))
    }
  })
})

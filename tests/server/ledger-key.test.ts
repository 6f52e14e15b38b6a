import { copyFile, readdir, readFile, stat, writeFile } from 'node:fs/promises'
import { join } from 'node:path'
import { setImmediate } from 'node:timers/promises'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { makeClient } from '../../cli/client.ts'
import { asText } from '../../cli/ledger/crypto.ts'
import { verifyAll } from '../../cli/ledger/verify-all.ts'
import { sha256, verifyEd25519 } from '../../server/ledger/crypto.ts'
import { readKeyFile } from '../../server/ledger/key-file.ts'
import { openLedger, reloadSigner } from '../../server/ledger/open-ledger.ts'
import { sequencePass } from '../../server/ledger/sequence.ts'
import { startSequencer } from '../../server/ledger/sequencer.ts'
import { signerOf } from '../../server/ledger/signer.ts'
import { checkLedger } from '../../shared/ledger/check/check-ledger.ts'
import { serverSource } from '../../shared/ledger/check/server-source.ts'
import { checkProof } from '../../shared/ledger/check-proof.ts'
import { checkIncluded } from '../../shared/ledger/check-receipt.ts'
import { type LedgerKey, parseVerifierKey } from '../../shared/ledger/checkpoint.ts'
import { memoryIo } from '../cli/support/memory-io.ts'
import { api, newKey, post } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import { addToken, listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

const crypto = { sha256, verify: verifyEd25519 }
const reason = 'The disk of the old server is sold.'
let scene: Scene
let first: LedgerKey
let before: { id: string; receipt: never }

beforeAll(async () => {
  scene = await serverScene()
  first = await key()
  before = await post(scene.url, scene.station, trimBody({ unit: 'K-1' }))
})
afterAll(() => scene.harness.close())

const key = async () => parseVerifierKey(sha256, (await api(scene.url, 'get', '/ledger/key')).text)!
const change = (as = scene.admin) => api(scene.url, 'post', '/ledger/keys', as).send({ reason })

async function proofOf(id: string, url = scene.url) {
  for (;;) {
    const reply = await api(url, 'get', `/ledger/proof/${id}`, scene.station)
    if (reply.status !== 409) return reply.body
    await new Promise((resolve) => setTimeout(resolve, 100))
  }
}

async function checkAll(kept: LedgerKey) {
  const { token } = await addToken(scene.harness, ['ledger:read'])
  const source = serverSource(makeClient({ url: scene.url, token }, memoryIo()))
  return checkLedger(source, {
    sha256,
    asText,
    run: async (check) => check(crypto),
    key: kept,
    kept: [],
    verifyAll,
    onProgress: () => undefined,
    turn: setImmediate,
  })
}

describe('a change of the ledger key', () => {
  it('is for administrators, with a reason', async () => {
    expect((await change(scene.engineer)).status).toBe(403)
    expect((await api(scene.url, 'post', '/ledger/keys', scene.station).send({ reason })).status).toBe(403)
    const short = await api(scene.url, 'post', '/ledger/keys', scene.admin).send({ reason: 'short' })
    expect(short.status).toBe(422)
    expect(await key()).toEqual(first)
  })

  it('signs with the new key at once, and what the old one signed still checks, from either end', async () => {
    await proofOf(before.id)
    const reply = await change()
    expect(reply.status).toBe(201)
    const second = await key()
    expect(second.publicKey).not.toEqual(first.publicKey)
    expect(parseVerifierKey(sha256, reply.body.key)).toEqual(second)
    const after = await post(scene.url, scene.station, trimBody({ unit: 'K-2' }))
    for (const record of [before, after]) {
      const proof = await proofOf(record.id)
      for (const kept of [first, second]) {
        expect(checkProof(crypto, proof, kept)).toMatchObject({ ok: true, recordId: record.id })
        expect(checkIncluded(crypto, record.receipt, proof, kept)).toMatchObject({ ok: true })
      }
    }
    const leaf = await scene.harness.database.sql.rows<{ body: Buffer }>(
      "SELECT body FROM ledger_leaves WHERE kind = 'key' ORDER BY id DESC LIMIT 1",
    )
    expect(JSON.parse(String(leaf[0]!.body))).toMatchObject({
      key: reply.body.key,
      changedBy: 'Test administrator',
      reason,
    })
  })

  it('leaves one private key on disk, readable by its owner alone', async () => {
    const files = (await readdir(scene.harness.dir)).filter((name) => name.startsWith('ledger.key'))
    expect(files).toEqual(['ledger.key'])
    expect((await stat(scene.harness.deps.keyFile)).mode & 0o777).toBe(0o600)
  })

  it('a third key goes on from the second, and the whole ledger checks from each', async () => {
    const second = await key()
    expect((await change()).status).toBe(201)
    const third = await key()
    await proofOf((await post(scene.url, scene.station, trimBody({ unit: 'K-3' }))).id)
    for (const kept of [first, second, third])
      expect(await checkAll(kept)).toMatchObject({ ok: true, found: 0 })
  })

  it('is taken up by another process that runs, once the file is there, and keeps it from signing until then', async () => {
    const { database, deps, dir } = scene.harness
    // As if on another machine, with a key file of its own.
    const elsewhere = join(dir, 'elsewhere.key')
    await copyFile(deps.keyFile, elsewhere)
    const other = await openLedger(database, { keyFile: elsewhere, ledgerName: null, now: deps.now })
    const served = await listen({ ...deps, ...other })
    await scene.harness.sequencer.stop()
    expect((await change()).status).toBe(201)
    const ready = () => fetch(`${served.url}/readyz`)
    expect((await ready()).status).toBe(503)
    expect(await (await ready()).text()).toContain('give it the new key file')
    await post(scene.url, scene.station, trimBody({ unit: 'K-4' }))
    const late = () => new Date(Date.now() + 5_000)
    await expect(sequencePass(database, other.signer, late)).rejects.toMatchObject({
      code: 'ledger-key-differs',
    })
    const sequencer = startSequencer(database, other.signer, late, deps.logger, {
      reload: () => reloadSigner(database, other.signer, elsewhere),
    })
    const record = async () =>
      api(served.url, 'post', '/trims', { ...scene.station, key: newKey() }).send(
        trimBody({ unit: newKey() }),
      )
    await expect.poll(async () => (await record()).status, { timeout: 20_000 }).toBe(503)
    expect((await record()).body).toMatchObject({
      code: 'not-ready',
      detail: expect.stringContaining('give it the new key file'),
    })
    expect((await api(served.url, 'get', '/trims', scene.station)).status).toBe(200)
    await copyFile(deps.keyFile, elsewhere)
    await expect.poll(async () => (await ready()).status, { timeout: 20_000 }).toBe(200)
    const after = await record()
    expect([after.status, after.body.receipt.key]).toEqual([201, deps.signer.keyName])
    expect(other.signer.keyName).toBe(deps.signer.keyName)
    await sequencer.stop()
    await served.stop()
  })

  it('survives a death between the database and the file', async () => {
    const { database, deps } = scene.harness
    const old = await readFile(deps.keyFile)
    expect((await change()).status).toBe(201)
    const made = await readFile(deps.keyFile)
    await writeFile(`${deps.keyFile}.next`, made, { mode: 0o600 })
    await writeFile(deps.keyFile, old)
    const again = await openLedger(database, { keyFile: deps.keyFile, ledgerName: null, now: deps.now })
    expect(again.signer.keyName).toBe(deps.signer.keyName)
    expect(await readFile(deps.keyFile)).toEqual(made)
    const onDisk = signerOf(deps.signer.key.name, (await readKeyFile(deps.keyFile))!)
    expect(onDisk.keyName).toBe(deps.signer.keyName)
  })

  it('of two at once one after the other takes place, and none is lost', async () => {
    const replies = await Promise.all([change(), change()])
    const numbers = replies.filter((reply) => reply.status === 201).map((reply) => reply.body.number)
    expect(numbers.length).toBeGreaterThan(0)
    expect(new Set(numbers).size).toBe(numbers.length)
    for (const reply of replies) expect([201, 500, 503]).toContain(reply.status)
    const { items } = (await api(scene.url, 'get', '/ledger/keys')).body
    expect(parseVerifierKey(sha256, items.at(-1).key)).toEqual(await key())
    expect((await fetch(`${scene.url}/readyz`)).status).toBe(200)
  })
})

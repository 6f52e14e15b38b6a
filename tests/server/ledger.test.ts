import { generateKeyPairSync } from 'node:crypto'
import { chmod, readFile, stat, writeFile } from 'node:fs/promises'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { transaction } from '../../server/db/transaction.ts'
import { sha256, verifyEd25519 } from '../../server/ledger/crypto.ts'
import { insertLeaves, newLeaf } from '../../server/ledger/leaves.ts'
import { openLedger } from '../../server/ledger/open-ledger.ts'
import { sequencePass } from '../../server/ledger/sequence.ts'
import { canonicalText } from '../../shared/ledger/canonical.ts'
import { checkCheckpoint, parseVerifierKey } from '../../shared/ledger/checkpoint.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { inclusionParts, proofHashes, rootFromInclusion } from '../../shared/ledger/proof.ts'
import { checkReceipt } from '../../shared/ledger/receipt.ts'
import { api, newKey, post } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import { addDesign, addStation, addToken, type Harness, serverHarness } from '../support/server-harness.ts'

let harness: Harness
let station: { token: string }

beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  station = await addToken(
    harness,
    ['trims:write', 'trims:read'],
    (await addStation(harness, 'Station A')).id,
  )
})
afterAll(() => harness.close())

const text = async (path: string) => (await api(harness.url, 'get', path)).text
const key = async () => parseVerifierKey(sha256, await text('/ledger/key'))!

async function checkpoint() {
  const read = checkCheckpoint(sha256, await text('/ledger/checkpoint'), await key(), verifyEd25519)
  expect(read).not.toBeNull()
  return read!
}

/** Passes until a checkpoint covers everything, which may be a second away. */
async function settled() {
  await expect
    .poll(
      async () => {
        await harness.sequencer.drain()
        const [head] = await harness.database.sql.rows<{ open: number }>(
          'SELECT size - checkpoint_size + (SELECT COUNT(*) FROM ledger_pending) AS open FROM ledger_head',
        )
        return head!.open
      },
      { timeout: 20_000, interval: 100 },
    )
    .toBe(0)
}

describe('a record in the ledger', () => {
  it('has a leaf that is the hash of exactly what was answered, a signed receipt, and a proof that checks', async () => {
    const record = await post(harness.url, station, trimBody({ unit: 'G-1' }))
    const { receipt, ledger: _, notices: __, ...body } = record
    const leaf = leafHash(sha256, leafBytes('record', record.recordedAt, Buffer.from(canonicalText(body))))
    expect(Buffer.from(leaf).toString('hex')).toBe(receipt.leaf)
    expect(checkReceipt(sha256, receipt, await key(), verifyEd25519)).toBe(true)
    await settled()
    const placed = (await api(harness.url, 'get', `/trims/${record.id}`, station)).body
    const { index } = placed.ledger
    const { size, root } = await checkpoint()
    const rows = await harness.database.sql.rows<{ level: number; idx: number; hash: Buffer }>(
      'SELECT level, idx, hash FROM ledger_nodes',
    )
    const hashes = new Map(rows.map((row) => [`${row.level}/${row.idx}`, row.hash]))
    const path = proofHashes(
      sha256,
      inclusionParts(index, size),
      (place) => hashes.get(`${place.level}/${place.index}`)!,
    )
    expect(Buffer.from(rootFromInclusion(sha256, leaf, index, size, path)!)).toEqual(Buffer.from(root))
  })

  it('answers at once without a place, and gets one soon by itself', async () => {
    const record = await post(harness.url, station, trimBody({ unit: 'G-2' }))
    expect(record.ledger).toBeNull()
    await expect
      .poll(async () => (await api(harness.url, 'get', `/trims/${record.id}`, station)).body.ledger, {
        timeout: 10_000,
      })
      .toEqual({ index: expect.any(Number) })
  })

  it('is stored as canonical bytes, which read back to the same hash', async () => {
    const rows = await harness.database.sql.rows<{ kind: 'record'; at: Date; hash: Buffer; body: Buffer }>(
      'SELECT kind, at, hash, body FROM ledger_leaves',
    )
    expect(new Set(rows.map((row) => row.kind))).toEqual(new Set(['key', 'release', 'token', 'record']))
    for (const row of rows) {
      expect(Buffer.from(leafHash(sha256, leafBytes(row.kind, row.at.toISOString(), row.body)))).toEqual(
        row.hash,
      )
      expect(canonicalText(JSON.parse(row.body.toString('utf8')))).toBe(row.body.toString('utf8'))
    }
  })
})

describe('the sequencer', () => {
  it('gives gapless places once, with several at work and transactions that roll back', async () => {
    const add = (n: number, fail: boolean) =>
      transaction(harness.database, async (sql) => {
        await insertLeaves(sql, [newLeaf('finding', new Date().toISOString(), { n, key: newKey() })])
        if (fail) throw new Error('rolled back')
      }).catch((error: Error) => expect(error.message).toBe('rolled back'))
    const pass = () => sequencePass(harness.database, harness.deps.signer, harness.deps.now)
    await Promise.all(Array.from({ length: 120 }, (_, i) => (i % 6 === 5 ? pass() : add(i, i % 4 === 0))))
    await settled()
    const entries = await harness.database.sql.rows<{ idx: number; leafId: number }>(
      'SELECT idx, leaf_id AS leafId FROM ledger_entries ORDER BY idx',
    )
    expect(entries.map((entry) => entry.idx)).toEqual(entries.map((_, i) => i))
    const [leaves] = await harness.database.sql.rows<{ n: number }>('SELECT COUNT(*) AS n FROM ledger_leaves')
    expect(entries).toHaveLength(leaves!.n)
    expect((await checkpoint()).size).toBe(leaves!.n)
  })

  it('signs at most one checkpoint a second', async () => {
    const rows = await harness.database.sql.rows<{ at: Date; size: number }>(
      'SELECT at, size FROM ledger_checkpoints ORDER BY number',
    )
    expect(rows.length).toBeGreaterThan(1)
    rows.slice(1).forEach((row, i) => {
      expect(row.at.getTime() - rows[i]!.at.getTime()).toBeGreaterThanOrEqual(1_000)
      expect(row.size).toBeGreaterThan(rows[i]!.size)
    })
  })

  it('goes through more than a pass takes', async () => {
    const leaves = Array.from({ length: 1_300 }, (_, i) =>
      newLeaf('finding', new Date().toISOString(), { i, key: newKey() }),
    )
    await transaction(harness.database, (sql) => insertLeaves(sql, leaves))
    await settled()
    const [row] = await harness.database.sql.rows<{ size: number; leaves: number }>(
      'SELECT size, (SELECT COUNT(*) FROM ledger_leaves) AS leaves FROM ledger_head',
    )
    expect(row!.size).toBe(row!.leaves)
  })
})

describe('the ledger key', () => {
  const options = () => ({
    keyFile: join(harness.dir, 'ledger.key'),
    ledgerName: null,
    now: () => new Date(),
  })

  it('is a file that only its owner may read, and opens the same ledger again', async () => {
    expect((await stat(options().keyFile)).mode & 0o777).toBe(0o600)
    const again = await openLedger(harness.database, options())
    expect(again.signer.keyName).toBe(harness.deps.signer.keyName)
    expect(again.sessionSecret).toBe(harness.deps.sessionSecret)
  })

  it('that differs, is missing or is no key stops the start and names both', async () => {
    const different = join(harness.dir, 'different.key')
    await writeFile(
      different,
      generateKeyPairSync('ed25519').privateKey.export({ type: 'pkcs8', format: 'pem' }),
    )
    const message = new RegExp(
      `${harness.deps.signer.keyName.replace('+', '\\+')}.*different\\.key.*test/ledger\\+`,
    )
    await expect(openLedger(harness.database, { ...options(), keyFile: different })).rejects.toMatchObject({
      code: 'ledger-key-differs',
      exit: 78,
      message: expect.stringMatching(message),
    })
    await expect(
      openLedger(harness.database, { ...options(), keyFile: join(harness.dir, 'none') }),
    ).rejects.toMatchObject({
      code: 'ledger-key-differs',
    })
    await writeFile(different, 'nonsense')
    await chmod(different, 0o600)
    await expect(openLedger(harness.database, { ...options(), keyFile: different })).rejects.toMatchObject({
      exit: 78,
    })
  })

  it('keeps the name that the ledger got at first start', async () => {
    await expect(
      openLedger(harness.database, { ...options(), ledgerName: 'other/name' }),
    ).rejects.toMatchObject({
      code: 'configuration',
      message: expect.stringContaining('test/ledger'),
    })
  })

  it('never stands in the database', async () => {
    const pem = await readFile(options().keyFile, 'utf8')
    const [row] = await harness.database.sql.rows<{ n: number }>('SELECT COUNT(*) AS n FROM ledger_keys')
    expect(row!.n).toBe(1)
    expect(pem).toContain('PRIVATE KEY')
    const bodies = await harness.database.sql.rows<{ body: Buffer }>(
      "SELECT body FROM ledger_leaves WHERE kind = 'key'",
    )
    expect(bodies.map((body) => JSON.parse(body.body.toString()))).toMatchObject([
      { format: 'ogee.key/1', replaces: null },
    ])
  })
})

it('two servers that start together agree on one key', async () => {
  const { testDatabase } = await import('../support/database.ts')
  const { migrate } = await import('../../server/db/migrate.ts')
  const { openDatabase } = await import('../../server/db/connection.ts')
  const test = await testDatabase()
  await Promise.all([migrate(test.adminUrl, test.url), migrate(test.adminUrl, test.url)])
  const databases = [openDatabase(test.url), openDatabase(test.url)]
  const keyFile = join(harness.dir, 'shared.key')
  const opened = await Promise.all(
    databases.map((database) => openLedger(database, { keyFile, ledgerName: null, now: () => new Date() })),
  )
  expect(opened[0]!.signer.keyName).toBe(opened[1]!.signer.keyName)
  await Promise.all(databases.map((database) => database.close()))
  await test.drop()
})

import { mkdtempSync } from 'node:fs'
import { appendFile, readFile, rm, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Connection } from 'mariadb'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { readConfig } from '../../server/config.ts'
import { sha256 } from '../../server/ledger/crypto.ts'
import { appendKept, compareWithKept } from '../../server/ledger/kept-file.ts'
import { sequencePass } from '../../server/ledger/sequence.ts'
import { runServer } from '../../server/run-server.ts'
import { signCheckpoint } from '../../shared/ledger/checkpoint.ts'
import { notesIn } from '../../shared/ledger/notes.ts'
import { testDatabase } from '../support/database.ts'
import { api, newKey, post, signIn } from '../support/server-client.ts'
import { testKey } from '../support/server-crypto.ts'
import { trimBody } from '../support/server-factories.ts'
import { listen } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
let root: Connection
let file = ''
let clock = Date.now()

beforeAll(async () => {
  scene = await serverScene()
  await scene.harness.sequencer.stop()
  root = await scene.harness.test.asRoot()
  file = join(scene.harness.dir, 'ledger-checkpoints.txt')
})
afterAll(async () => {
  await root.end()
  await scene.harness.close()
})

const signer = () => scene.harness.deps.signer
const compare = () => compareWithKept(scene.harness.database.sql, signer(), file)
const kept = async () => notesIn(await readFile(file, 'utf8'))
const sizeOf = (note: string | undefined) => Number(note?.split('\n')[1])

/** Records some and signs what is then there, as a server does that keeps the file. */
async function record(count: number) {
  for (let i = 0; i < count; i++) await post(scene.url, scene.station, trimBody({ unit: `F-${newKey()}` }))
  clock += 5_000
  const { note } = await sequencePass(scene.harness.database, signer(), () => new Date(clock))
  await appendKept(file, note!)
}

describe('the checkpoints kept outside of the database', () => {
  it('begin with the newest when there is no file, and are not doubled', async () => {
    clock += 5_000
    await sequencePass(scene.harness.database, signer(), () => new Date(clock))
    expect(await compare()).toBeNull()
    expect(await kept()).toHaveLength(1)
    expect(await compare()).toBeNull()
    expect(await kept()).toHaveLength(1)
  })

  it('grow with what is signed, also by several that append to one file', async () => {
    await record(2)
    await record(1)
    const before = await kept()
    expect(before.map(sizeOf)).toEqual([...before.map(sizeOf)].sort((a, b) => a - b))
    await Promise.all(Array.from({ length: 40 }, () => appendKept(file, before[0]!)))
    expect(await kept()).toHaveLength(before.length + 40)
    expect(await compare()).toBeNull()
  })

  it('pass over a line that was cut when a machine died', async () => {
    await appendFile(file, 'test/ledger\n99')
    await record(1)
    expect(await compare()).toBeNull()
  })

  const contradicting = async (act: () => Promise<void>, undo: () => Promise<void>, words: RegExp) => {
    await act()
    expect(await compare()).toMatch(words)
    await undo()
    expect(await compare()).toBeNull()
  }

  it('contradict a database that lost its end', async () => {
    await root.query('DROP TRIGGER ledger_checkpoints_no_delete')
    await root.query('CREATE TABLE kept_checkpoints AS SELECT * FROM ledger_checkpoints')
    await contradicting(
      async () => {
        await root.query('DELETE FROM ledger_checkpoints WHERE number > 2')
      },
      async () => {
        await root.query('DELETE FROM ledger_checkpoints')
        await root.query('INSERT INTO ledger_checkpoints SELECT * FROM kept_checkpoints')
      },
      /old backup was put back.*move .*ledger-checkpoints\.txt away/,
    )
  })

  it('contradict a database whose history is another', async () => {
    await root.query('DROP TRIGGER ledger_nodes_no_update')
    const flip = async () => {
      await root.query('UPDATE ledger_nodes SET hash = UNHEX(REVERSE(HEX(hash))) WHERE level = 3')
    }
    await contradicting(flip, flip, /it was rewritten/)
  })

  it('that a stranger signed are no history of ours', async () => {
    const text = await readFile(file)
    const stranger = testKey('test/ledger')
    const checkpoint = { origin: 'test/ledger', size: 3, root: sha256(Buffer.from('x')) }
    await contradicting(
      () => writeFile(file, signCheckpoint(sha256, checkpoint, stranger.key, stranger.sign)),
      () => writeFile(file, text),
      /signed by another key/,
    )
  })

  it('moved away, the server begins a new file', async () => {
    await rm(file)
    expect(await compare()).toBeNull()
    expect(await kept()).toHaveLength(1)
  })
})

describe('a server whose database contradicts what was kept', () => {
  it('says so at /readyz, records and changes nothing, and lets people look', async () => {
    const historyFault = 'A checkpoint over 60 entries was signed; the database has 40.'
    const served = await listen({ ...scene.harness.deps, historyFault })
    const ready = await fetch(`${served.url}/readyz`)
    expect(ready.status).toBe(503)
    expect(await ready.json()).toMatchObject({ code: 'not-ready', detail: historyFault })
    const refused = await api(served.url, 'post', '/trims', { ...scene.station, key: newKey() }).send(
      trimBody(),
    )
    expect(refused.status).toBe(503)
    expect(refused.body).toMatchObject({ code: 'not-ready', detail: historyFault })
    const cookie = await signIn(served.url, 'engineer@example.org')
    expect((await api(served.url, 'get', '/trims', { cookie })).status).toBe(200)
    expect((await api(served.url, 'post', '/designs', { cookie }).send({})).status).toBe(503)
    expect((await api(served.url, 'get', '/ledger/checkpoint')).status).toBe(200)
    expect((await api(served.url, 'delete', '/session', { cookie })).status).toBe(204)
    await served.stop()
  })
})

it('a server keeps what it signs in its data folder, and after an old backup was put back does not go on', async () => {
  const database = await testDatabase()
  const dataDir = mkdtempSync(join(tmpdir(), 'ogee-kept-'))
  const env = {
    PORT: '0',
    OGEE_DATA_DIR: dataDir,
    DATABASE_URL: database.url,
    DATABASE_ADMIN_URL: database.adminUrl,
    OGEE_LOG: 'silent',
  }
  const start = () => runServer(readConfig(env), () => undefined)
  const path = join(dataDir, 'ledger-checkpoints.txt')
  const first = await start()
  await expect
    .poll(async () => sizeOf(notesIn(await readFile(path, 'utf8')).at(-1)), { timeout: 20_000 })
    .toBe(1)
  expect((await fetch(`${first.address}/readyz`)).status).toBe(200)
  await first.stop()
  const asRoot = await database.asRoot()
  await asRoot.query('DROP TRIGGER ledger_checkpoints_no_delete')
  await asRoot.query('DELETE FROM ledger_checkpoints WHERE size > 0')
  await asRoot.end()
  const second = await start()
  const ready = await fetch(`${second.address}/readyz`)
  expect(ready.status).toBe(503)
  expect(await ready.text()).toContain('an old backup was put back')
  await second.stop()
  await database.drop()
  await rm(dataDir, { recursive: true })
})

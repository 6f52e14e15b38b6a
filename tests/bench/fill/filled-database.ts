import { existsSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { createConnection } from 'mariadb'
import { openDatabase } from '../../../server/db/connection.ts'
import { migrate } from '../../../server/db/migrate.ts'
import { loadDemo } from '../../../server/demo/load-demo.ts'
import { openLedger } from '../../../server/ledger/open-ledger.ts'
import { sequencePass } from '../../../server/ledger/sequence.ts'
import { startMariadb } from '../../../server/setup/mariadb.mjs'
import { fillRecords } from './fill.ts'

export type FilledDatabase = {
  url: string
  adminUrl: string
  socket: string
  /** Data folder for a server on it: holds the ledger's key and the demo's accounts. */
  dataDir: string
  stop: () => Promise<void>
}

/**
 * A private MariaDB with the demo and `count` further records, as `npm start` would run it. `OGEE_FILL_DIR` keeps it in that folder for the
 * next run, by count and seed; else it is made anew and removed when stopped.
 */
export async function filledDatabase(count: number, seed = 1): Promise<FilledDatabase> {
  const keep = process.env.OGEE_FILL_DIR
  const dir = keep ? join(keep, `${count}-${seed}`) : mkdtempSync(join(tmpdir(), 'ogee-fill-'))
  const done = join(dir, 'filled')
  if (!existsSync(done)) rmSync(dir, { recursive: true, force: true })
  const dataDir = join(dir, 'server')
  mkdirSync(dataDir, { recursive: true })
  const database = await startMariadb({ dir: join(dir, 'db'), size: 'start' })
  if (!existsSync(done)) {
    await prepare(database, dataDir, count, seed)
    writeFileSync(done, '')
  }
  return {
    url: database.url,
    adminUrl: database.adminUrl,
    socket: database.socket,
    dataDir,
    stop: async () => {
      await database.stop()
      if (!keep) rmSync(dir, { recursive: true, force: true })
    },
  }
}

type Started = { url: string; adminUrl: string; socket: string }

async function prepare(
  { url, adminUrl, socket }: Started,
  dataDir: string,
  count: number,
  seed: number,
): Promise<void> {
  await migrate(adminUrl, url)
  const database = openDatabase(url)
  const now = () => new Date()
  const { signer } = await openLedger(database, {
    keyFile: join(dataDir, 'ledger.key'),
    ledgerName: null,
    now,
  })
  await loadDemo({ database, signer, now, notifyLedger: () => undefined }, dataDir, () => undefined)
  while ((await sequencePass(database, signer, now)).more);
  await database.close()
  const asRoot = () =>
    createConnection({ socketPath: socket, user: 'root', database: 'ogee', permitLocalInfile: true })
  const roots = [await asRoot(), await asRoot()] as const
  await roots[0].query('SET GLOBAL innodb_flush_log_at_trx_commit = 0')
  const since = Date.now()
  const onProgress = (done: number) => {
    const rate = Math.round(done / ((Date.now() - since) / 1_000))
    if (done % 50_000 < 5_000 && process.stderr.isTTY)
      process.stderr.write(`filled ${done} of ${count}, ${rate} /s\r`)
  }
  await fillRecords({ roots, signer, count, seed, end: new Date(), onProgress })
  process.stderr.write(`filled ${count} records in ${Math.round((Date.now() - since) / 1_000)} s\n`)
  await roots[0].query('SET GLOBAL innodb_flush_log_at_trx_commit = 1')
  for (const root of roots) await root.end()
}

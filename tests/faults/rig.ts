import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { type Connection, createConnection } from 'mariadb'
import { type PrivateDatabase, startMariadb } from '../../server/setup/mariadb.mjs'
import { type ServerProcess, startServer } from '../support/server-process.ts'

/** A database that may be killed, and the built server on it. */
export type Rig = {
  server: ServerProcess
  token: string
  killDatabase: () => Promise<void>
  restartDatabase: () => Promise<void>
  /** Whether MariaDB fell over by a defect of its own since the last time asked; a kill is none. */
  databaseFell: () => boolean
  asRoot: () => Promise<Connection>
  /** Where further servers find the same database. */
  addresses: () => { databaseUrl: string; adminUrl: string }
  /** Waits until every committed leaf has its place. */
  settled: () => Promise<void>
  close: () => Promise<void>
}

/** `dir`: where the database lies, when not in a folder of its own that is removed at the end. */
export async function startRig(options: { dir?: string } = {}): Promise<Rig> {
  const dir = options.dir ?? mkdtempSync(join(tmpdir(), 'ogee-faults-'))
  let database: PrivateDatabase = await startMariadb({ dir, size: 'test' })
  const port = Number(new URL(database.url.replace('mariadb:', 'http:')).port)
  const server = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    env: { OGEE_LOG: 'warn' },
  })
  const falls = () => readFileSync(join(dir, 'mariadb.log'), 'utf8').match(/got signal \d+/g)?.length ?? 0
  let seen = 0
  const asRoot = () =>
    createConnection({ socketPath: database.socket, user: 'root', database: 'ogee', timezone: 'Z' })
  return {
    server,
    token: server.accounts().token,
    killDatabase: async () => {
      database.kill()
      await database.ended
    },
    restartDatabase: async () => {
      database = await startMariadb({ dir, size: 'test', port })
    },
    databaseFell: () => {
      const before = seen
      seen = falls()
      return seen > before
    },
    asRoot,
    addresses: () => ({ databaseUrl: database.url, adminUrl: database.adminUrl }),
    settled: async () => {
      const root = await asRoot()
      for (let waited = 0; waited < 30_000; waited += 100) {
        const [row] = await root.query<{ n: bigint }[]>('SELECT COUNT(*) AS n FROM ledger_pending')
        if (Number(row?.n) === 0) break
        await new Promise((resolve) => setTimeout(resolve, 100))
      }
      await root.end()
    },
    close: async () => {
      await server.remove()
      await database.stop()
      if (options.dir === undefined) rmSync(dir, { recursive: true, force: true })
    },
  }
}

/** Runs `task` for each item, `width` at a time, in order of the items. */
export async function inParallel<T>(
  items: readonly T[],
  width: number,
  task: (item: T) => Promise<void>,
): Promise<void> {
  let next = 0
  await Promise.all(
    Array.from({ length: width }, async () => {
      while (next < items.length) {
        const item = items[next]!
        next += 1
        await task(item)
      }
    }),
  )
}

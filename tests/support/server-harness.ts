import { mkdtempSync, rmSync } from 'node:fs'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { Writable } from 'node:stream'
import { pino } from 'pino'
import { createApp } from '../../server/app.ts'
import { createDesign } from '../../server/commands/create-design.ts'
import { createPerson } from '../../server/commands/create-person.ts'
import { createStation } from '../../server/commands/create-station.ts'
import { createToken } from '../../server/commands/create-token.ts'
import { releaseRevision } from '../../server/commands/revisions/release-revision.ts'
import { submitRevision } from '../../server/commands/revisions/submit-revision.ts'
import { openDatabase } from '../../server/db/connection.ts'
import { migrate } from '../../server/db/migrate.ts'
import { transaction } from '../../server/db/transaction.ts'
import { type Deps, defaultQuotas } from '../../server/http/deps.ts'
import { createServer } from '../../server/http/http-server.ts'
import { hashPassword } from '../../server/http/passwords.ts'
import { errorFacts } from '../../server/http/request-log.ts'
import { openLedger } from '../../server/ledger/open-ledger.ts'
import { startSequencer } from '../../server/ledger/sequencer.ts'
import { newSetupSecret } from '../../server/policies/setup-secret.ts'
import type { Role, Scope } from '../../shared/contract/primitives.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { type TestDatabase, testDatabase } from './database.ts'
import { unipolar } from './server-factories.ts'

export const testPassword = 'a password for tests only'

/** One app on one database, listening on loopback, with a clock that tests set. */
export type Harness = Awaited<ReturnType<typeof serverHarness>>
export type LogLine = {
  level: string
  msg?: string
  status?: number
  problem?: string
  [field: string]: unknown
}

type Options = { quotas?: Partial<Deps['quotas']>; config?: Partial<Deps['config']>; database?: TestDatabase }

export async function serverHarness(options: Options = {}) {
  const test = options.database ?? (await testDatabase())
  await migrate(test.adminUrl, test.url)
  const database = openDatabase(test.url)
  const dir = mkdtempSync(join(tmpdir(), 'ogee-server-test-'))
  const clock = { shiftMs: 0 }
  const now = () => new Date(Date.now() + clock.shiftMs)
  const log: LogLine[] = []
  const logger = testLogger(log)
  const opened = await openLedger(database, {
    keyFile: join(dir, 'ledger.key'),
    ledgerName: 'test/ledger',
    now,
  })
  const sequencer = startSequencer(database, opened.signer, now, logger)
  const deps: Deps = {
    ...opened,
    database,
    notifyLedger: sequencer.notify,
    now,
    logger,
    config: {
      baseUrl: null,
      tls: null,
      trustedHops: 0,
      webRoot: join(dir, 'web'),
      dev: false,
      selfRelease: false,
      ...options.config,
    },
    setup: newSetupSecret(),
    quotas: { ...defaultQuotas, ...options.quotas },
    checkReplies: true,
  }
  const served = await listen(deps)
  return {
    ...served,
    test,
    database,
    deps,
    dir,
    clock,
    log,
    sequencer,
    close: async () => {
      await served.stop()
      await sequencer.stop()
      await database.close()
      rmSync(dir, { recursive: true, force: true })
      if (!options.database) await test.drop()
    },
  }
}

/** The app of some dependencies on a free port: a second call makes a second server on the same database. */
export async function listen(deps: Deps) {
  const app = createApp(deps)
  const server = createServer(app.express, null)
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve))
  const { port } = server.address() as AddressInfo
  return {
    url: `http://127.0.0.1:${port}`,
    port,
    stop: async () => {
      app.stop()
      server.closeAllConnections()
      await new Promise((resolve) => server.close(resolve))
    },
  }
}

function testLogger(log: LogLine[]) {
  const sink = new Writable({
    write: (chunk: Buffer, _, done) => {
      log.push(JSON.parse(chunk.toString('utf8')) as LogLine)
      done()
    },
  })
  return pino(
    { level: 'debug', formatters: { level: (level) => ({ level }) }, serializers: { err: errorFacts } },
    sink,
  )
}

let passwordHash: Promise<string> | undefined

export async function addPerson(
  { deps, database }: Pick<Harness, 'deps' | 'database'>,
  role: Role,
  email = `${role}@example.org`,
) {
  passwordHash ??= hashPassword(testPassword)
  const hash = await passwordHash
  return transaction(database, (sql) =>
    createPerson(database.models, sql, {
      name: `Test ${role}`,
      email,
      role,
      passwordHash: hash,
      at: deps.now(),
      by: 'tests',
    }),
  )
}

export async function addStation({ deps }: Pick<Harness, 'deps'>, name: string) {
  return createStation(deps, name)
}

export async function addToken(
  { deps }: Pick<Harness, 'deps'>,
  scopes: Scope[],
  station: string | null = null,
  more: { designs?: string[] | null; days?: number } = {},
) {
  const asked = { name: 'Test token', scopes, station, designs: more.designs ?? null, days: more.days ?? 30 }
  return createToken(deps, asked, 'tests')
}

/** A design with revision 1 released, the unipolar example unless told otherwise. */
export async function addDesign({ deps }: Pick<Harness, 'deps'>, key: string, document: Json = unipolar()) {
  const author = { kind: 'person', id: '00000000-0000-7000-8000-00000000000a', name: 'Author' } as const
  await createDesign(deps, { key, document, author })
  await submitRevision(deps, { key, number: 1, by: author, ifMatch: null })
  const releaser = { kind: 'person', id: 'b', name: 'Releaser' } as const
  await releaseRevision(deps, { key, number: 1, by: releaser, ifMatch: null })
}

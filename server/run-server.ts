import { readFileSync } from 'node:fs'
import type { RequestListener, Server } from 'node:http'
import type { AddressInfo } from 'node:net'
import type { RequestHandler } from 'express'
import type { Logger } from 'pino'
import { OgeeError } from '../shared/errors.ts'
import { createApp } from './app.ts'
import { isSetupOpen } from './commands/create-first-administrator.ts'
import { type Config, servedOverTls } from './config.ts'
import { type Database, openDatabase } from './db/connection.ts'
import { isUpToDate, migrate, missingSteps } from './db/migrate.ts'
import { loadDemo } from './demo/load-demo.ts'
import { type Deps, defaultQuotas } from './http/deps.ts'
import { createServer } from './http/http-server.ts'
import { appendKept, compareWithKept, keptFileOf } from './ledger/kept-file.ts'
import { type OpenedLedger, openLedger, reloadSigner } from './ledger/open-ledger.ts'
import { type Sequencer, startSequencer } from './ledger/sequencer.ts'
import { createLogger } from './log.ts'
import { newSetupSecret, type SetupSecret } from './policies/setup-secret.ts'

export type RunningServer = { address: string; stop: () => Promise<void> }

/** Starts everything in order and gives back how to stop it: accept no more, finish what is under way, close the pool. */
export async function runServer(config: Config, say: (line: string) => void): Promise<RunningServer> {
  const logger = createLogger(config.log)
  const database = openDatabase(config.databaseUrl)
  await bringUpToDate(database, config)
  const now = () => new Date()
  const opened = await openLedger(database, { ...config, now })
  const historyFault = await compareWithKept(database.sql, opened.signer, keptFileOf(config.dataDir))
  if (historyFault !== null) logger.fatal(historyFault)
  const sequencer = historyFault === null ? sequencerOf(database, opened, now, logger, config) : null
  const setup = newSetupSecret()
  const deps: Deps = {
    ...opened,
    database,
    historyFault,
    notifyLedger: () => sequencer?.notify(),
    now,
    logger,
    config,
    setup,
    quotas: defaultQuotas,
  }
  if (config.demo && historyFault === null) await loadDemo(deps, config.dataDir, say)
  let listener: RequestListener = () => undefined
  const server = createServer(
    (request, response) => listener(request, response),
    config.tls && readTls(config.tls),
  )
  const vite = config.dev ? await developmentPage(server) : null
  const app = createApp(vite ? { ...deps, devPage: vite.middleware } : deps)
  listener = app.express
  await new Promise<void>((resolve, reject) => {
    server.once('error', (cause: NodeJS.ErrnoException) => reject(cannotListen(config, cause)))
    server.listen(config.port, config.host, resolve)
  })
  const address = addressOf(config, server.address() as AddressInfo)
  if (await isSetupOpen(database.sql)) sayHowToSetUp(say, address, setup)
  say(`Ogee is ready at ${address}`)
  return {
    address,
    stop: async () => {
      const closed = new Promise((resolve) => server.close(resolve))
      server.closeIdleConnections()
      await Promise.race([closed, new Promise((resolve) => setTimeout(resolve, 5_000).unref())])
      server.closeAllConnections()
      app.stop()
      await vite?.close()
      await sequencer?.stop()
      await database.close()
    },
  }
}

/** Gives places, keeps what it signs outside of the database too, and takes up a key that another server made. */
function sequencerOf(
  database: Database,
  { signer, keyFile }: OpenedLedger,
  now: () => Date,
  logger: Logger,
  { dataDir }: Config,
): Sequencer {
  return startSequencer(database, signer, now, logger, {
    onCheckpoint: (note) => appendKept(keptFileOf(dataDir), note),
    reload: () => reloadSigner(database, signer, keyFile),
  })
}

function readTls({ cert, key }: { cert: string; key: string }): { cert: Buffer; key: Buffer } {
  try {
    return { cert: readFileSync(cert), key: readFileSync(key) }
  } catch (cause) {
    throw new OgeeError('configuration', 'The files of OGEE_TLS_CERT and OGEE_TLS_KEY cannot be read.', {
      cause,
    })
  }
}

async function bringUpToDate(database: Database, { adminUrl, databaseUrl }: Config): Promise<void> {
  if (adminUrl !== null) {
    if (!(await isUpToDate(database, databaseUrl))) await migrate(adminUrl, databaseUrl)
    return
  }
  const missing = await missingSteps(database)
  if (missing.length === 0) return
  throw new OgeeError(
    'configuration',
    `The database lacks ${missing.join(', ')}: set DATABASE_ADMIN_URL for one start, so that it can be brought up to date.`,
  )
}

/** In a fragment, which no browser sends and no log sees. */
function sayHowToSetUp(say: (line: string) => void, address: string, setup: SetupSecret): void {
  say(`There are no people yet. Make the first administrator at ${address}/setup#${setup.text}`)
}

function addressOf(config: Config, bound: AddressInfo): string {
  if (config.baseUrl !== null) return config.baseUrl
  const host = bound.family === 'IPv6' ? `[${bound.address}]` : bound.address
  return `${servedOverTls(config) ? 'https' : 'http'}://${host}:${bound.port}`
}

function cannotListen(config: Config, cause: NodeJS.ErrnoException): Error {
  const taken = cause.code === 'EADDRINUSE' ? 'it is in use. Set PORT to another' : cause.message
  return new OgeeError('configuration', `Cannot listen on ${config.host}:${config.port}: ${taken}.`, {
    cause,
  })
}

/** Vite inside our own server, so that page, its reloads and interface share one port while developing. */
async function developmentPage(
  server: Server,
): Promise<{ middleware: RequestHandler; close: () => Promise<void> }> {
  const { createServer: createVite } = await import('vite')
  const vite = await createVite({
    // Other loaders write the configuration into a passing file, which `node --watch` takes for a change of ours.
    configLoader: 'runner',
    server: { middlewareMode: true, hmr: { server } },
    appType: 'spa',
  })
  return { middleware: vite.middlewares as unknown as RequestHandler, close: () => vite.close() }
}

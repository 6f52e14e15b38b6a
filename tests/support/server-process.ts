import { type ChildProcess, spawn } from 'node:child_process'
import { mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { createServer } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'

const root = join(import.meta.dirname, '../..')

export type DemoAccounts = { people: { email: string; role: string; password: string }[]; token: string }

/** The built server as a process of its own, so that it can be killed as a machine would kill it. */
export type ServerProcess = {
  url: string
  pid: () => number
  dataDir: string
  /** What it wrote to stdout and stderr so far. */
  log: () => string
  accounts: () => DemoAccounts
  /** kill -9, and gone when the promise resolves. */
  kill: () => Promise<void>
  /** SIGTERM, and gone when the promise resolves; gives the exit code. */
  stop: () => Promise<number | null>
  /** Starts it again on the same port and data folder; resolves when it answers. */
  restart: () => Promise<void>
  /** Stops it and removes its data folder. */
  remove: () => Promise<void>
}

export async function freePort(): Promise<number> {
  return await new Promise((resolve, reject) => {
    const probe = createServer()
    probe.once('error', reject)
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address()
      probe.close(() => resolve(typeof address === 'object' && address ? address.port : 0))
    })
  })
}

export async function startServer(options: {
  databaseUrl: string
  adminUrl: string
  env?: Record<string, string>
  /** Share the key and accounts of another server process on the same database. */
  dataDir?: string
}): Promise<ServerProcess> {
  const port = await freePort()
  const dataDir = options.dataDir ?? mkdtempSync(join(tmpdir(), 'ogee-server-'))
  mkdirSync(dataDir, { recursive: true })
  const url = `http://127.0.0.1:${port}`
  let log = ''
  let child: ChildProcess | undefined
  const gone = (process: ChildProcess) =>
    new Promise<number | null>((resolve) => {
      if (process.exitCode !== null || process.signalCode !== null) resolve(process.exitCode)
      else process.once('exit', (code) => resolve(code))
    })
  const start = async () => {
    child = spawn(process.execPath, [join(root, 'dist/server/main.mjs')], {
      env: {
        PATH: process.env.PATH ?? '',
        NODE_ENV: 'production',
        HOST: '127.0.0.1',
        PORT: String(port),
        OGEE_DATA_DIR: dataDir,
        DATABASE_URL: options.databaseUrl,
        DATABASE_ADMIN_URL: options.adminUrl,
        OGEE_DEMO: '1',
        ...options.env,
      },
      stdio: ['ignore', 'pipe', 'pipe'],
    })
    const add = (chunk: Buffer) => {
      log += chunk.toString()
    }
    child.stdout?.on('data', add)
    child.stderr?.on('data', add)
    await untilReady(url, child, () => log)
  }
  /** As the supervisor does: a server that met no database (75) is started again. */
  const restart = async (tries = 20): Promise<void> => {
    await start().catch(async (error: unknown) => {
      if (child?.exitCode !== 75 || tries === 1) throw error
      await sleep(50)
      await restart(tries - 1)
    })
  }
  await start()
  const running = () => {
    if (!child) throw new Error('the server was never started')
    return child
  }
  const end = async (signal: NodeJS.Signals) => {
    running().kill(signal)
    return await gone(running())
  }
  return {
    url,
    dataDir,
    pid: () => running().pid ?? 0,
    log: () => log,
    accounts: () => JSON.parse(readFileSync(join(dataDir, 'demo-accounts.json'), 'utf8')) as DemoAccounts,
    kill: async () => void (await end('SIGKILL')),
    stop: () => end('SIGTERM'),
    restart: () => restart(),
    remove: async () => {
      await end('SIGTERM')
      rmSync(dataDir, { recursive: true, force: true })
    },
  }
}

async function untilReady(url: string, child: ChildProcess, log: () => string): Promise<void> {
  for (let waited = 0; waited < 60_000; waited += 20) {
    if (child.exitCode !== null) throw new Error(`the server ended with ${child.exitCode}:\n${log()}`)
    const ready = await fetch(`${url}/readyz`).then(
      (response) => response.ok,
      () => false,
    )
    if (ready) return
    await sleep(20)
  }
  throw new Error(`the server did not become ready:\n${log()}`)
}

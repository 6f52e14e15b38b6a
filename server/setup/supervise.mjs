import { spawn } from 'node:child_process'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { dropLock, takeLock } from './lock.mjs'
import { startMariadb } from './mariadb.mjs'
import { dataDir, inRoot, root } from './paths.mjs'

/**
 * `npm start`: keeps the database and the server running, restarts whichever dies, and stops both in order.
 *
 * The server child hears from us over its IPC channel; when that closes because we were killed, it ends by itself, and
 * a MariaDB left behind is ended by the next start.
 */

const development = process.argv.includes('--dev')
const dir = dataDir()
const lock = join(dir, 'run.lock')
/** Exit codes with which the server says that starting it again would change nothing. */
const finalCodes = new Set([64, 78])

/** @param {string} line */
const say = (line) => process.stderr.write(`ogee: ${line}\n`)

const holder = takeLock(lock, {
  address: `http://${process.env.HOST ?? '127.0.0.1'}:${process.env.PORT ?? '4310'}`,
})
if (holder) {
  say(
    `already running as process ${holder.pid}, at ${holder.address}. Stop that one first, or set OGEE_DATA_DIR and PORT for a second.`,
  )
  process.exit(75)
}

let stopping = false
let exitCode = 0
/** @type {import('./mariadb.mjs').PrivateDatabase | undefined} */
let database
/** @type {import('node:child_process').ChildProcess | undefined} */
let server

/** Restarts a private database that dies, on the same port, so that the server's pool finds it again. */
async function keepDatabase() {
  /** @type {number | undefined} */
  let port
  while (!stopping) {
    try {
      database = await startMariadb({ dir, size: 'start', ...(port ? { port } : {}) })
    } catch (error) {
      if (port === undefined) throw error
      say(`the database does not start (${error instanceof Error ? error.message : error}); trying again`)
      await sleep(1000)
      continue
    }
    if (port !== undefined) say('the database is running again')
    port ??= Number(new URL(database.url.replace('mariadb:', 'http:')).port)
    started()
    await database.ended
    if (!stopping) say('the database has ended; starting it again')
  }
}
/** @type {() => void} */
let started = () => {}
/** @type {Promise<void>} */
const firstStart = new Promise((resolve) => {
  started = resolve
})

function serverCommand() {
  return development
    ? ['--watch', '--watch-preserve-output', '--import', 'tsx', inRoot('server/main.ts')]
    : [inRoot('dist/server/main.mjs')]
}

/** @param {NodeJS.ProcessEnv} env */
async function keepServer(env) {
  let pause = 50
  while (!stopping) {
    const since = Date.now()
    const child = spawn(process.execPath, serverCommand(), {
      cwd: root,
      env,
      detached: true,
      stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
    })
    server = child
    /** @type {number | null} */
    const code = await new Promise((resolve) => {
      child.once('exit', (status) => resolve(status))
      child.once('error', () => resolve(null))
    })
    if (stopping) return
    if (code !== null && finalCodes.has(code)) return stop(code)
    if (code === 0) return stop(0)
    say('the server has ended unexpectedly; starting it again')
    pause = Date.now() - since > 5000 ? 50 : Math.min(pause * 2, 5000)
    await sleep(pause)
  }
}

/** @param {number} code */
async function stop(code) {
  if (stopping) return
  stopping = true
  exitCode = code
  const child = server
  if (child && child.exitCode === null && child.signalCode === null) {
    const over = new Promise((resolve) => child.once('exit', resolve))
    child.kill('SIGTERM')
    await Promise.race([over, sleep(10_000)])
    child.kill('SIGKILL')
    await over
  }
  await database?.stop()
  dropLock(lock)
  process.exit(exitCode)
}

for (const signal of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP']))
  process.on(signal, () => void stop(0))

/** @type {NodeJS.ProcessEnv} */
const env = {
  ...process.env,
  OGEE_DATA_DIR: dir,
  ...(development ? { OGEE_DEV: '1' } : { NODE_ENV: 'production' }),
}
try {
  if (env.DATABASE_URL === undefined) {
    keepDatabase().catch(async (error) => {
      say(error instanceof Error ? error.message : String(error))
      await stop(70)
    })
    await firstStart
    env.DATABASE_URL = database?.url
    env.DATABASE_ADMIN_URL = database?.adminUrl
    env.OGEE_DEMO ??= '1'
  }
  await keepServer(env)
} catch (error) {
  say(error instanceof Error ? error.message : String(error))
  await stop(70)
}

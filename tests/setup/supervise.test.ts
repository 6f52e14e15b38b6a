import { type ChildProcess, spawn } from 'node:child_process'
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, statSync } from 'node:fs'
import { request } from 'node:http'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { freePort } from '../support/server-process.ts'

/** `npm start` as its user meets it: ready, twice, stopped, killed. */

const root = join(import.meta.dirname, '../..')
let dir = ''
let port = 0
let running: Started[] = []

type Started = { child: ChildProcess; said: () => string; ended: Promise<number | null> }

const start = (...args: string[]) =>
  run(process.execPath, [join(root, 'server/setup/supervise.mjs'), ...args])

/** The command itself, without its first step: what is built is built. */
const startByNpm = () => run('npm', ['start', '--ignore-scripts'])

function run(command: string, args: readonly string[]): Started {
  let said = ''
  const child = spawn(command, args, {
    cwd: root,
    env: {
      PATH: process.env.PATH ?? '',
      HOME: process.env.HOME ?? '',
      OGEE_DATA_DIR: dir,
      PORT: String(port),
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  for (const stream of [child.stdout, child.stderr])
    stream?.on('data', (chunk: Buffer) => (said += chunk.toString()))
  const ended = new Promise<number | null>((resolve) => child.once('exit', (code) => resolve(code)))
  const started = { child, said: () => said, ended }
  running.push(started)
  return started
}

const isReady = () =>
  fetch(`http://127.0.0.1:${port}/readyz`).then(
    (response) => response.ok,
    () => false,
  )

async function until(
  what: string,
  check: () => boolean | Promise<boolean>,
  { said }: Started,
): Promise<void> {
  for (let waited = 0; waited < 60_000; waited += 50) {
    if (await check()) return
    await sleep(50)
  }
  throw new Error(`not within a minute: ${what}\n${said()}`)
}

/** The status with which the server answers whoever asks for the socket over which Vite tells pages to reload. */
function reloadSocket(): Promise<number | undefined> {
  return new Promise((resolve, reject) => {
    const asked = request({
      port,
      host: '127.0.0.1',
      headers: {
        Connection: 'Upgrade',
        Upgrade: 'websocket',
        'Sec-WebSocket-Version': '13',
        'Sec-WebSocket-Key': 'AAAAAAAAAAAAAAAAAAAAAA==',
        'Sec-WebSocket-Protocol': 'vite-ping',
      },
    })
    asked.on('upgrade', ({ statusCode }, socket) => {
      socket.destroy()
      resolve(statusCode)
    })
    asked.on('response', ({ statusCode }) => resolve(statusCode))
    asked.on('error', reject)
    asked.end()
  })
}

/** Process ids that name our data folder on their command line or in their environment. */
function processesOfOurs(): number[] {
  return readdirSync('/proc')
    .filter((name) => /^\d+$/.test(name))
    .filter((pid) => {
      try {
        const belongs =
          readFileSync(`/proc/${pid}/environ`, 'utf8').includes(dir) ||
          readFileSync(`/proc/${pid}/cmdline`, 'utf8').includes(dir)
        return belongs && !/^\d+ \(.*\) Z/.test(readFileSync(`/proc/${pid}/stat`, 'utf8'))
      } catch {
        return false
      }
    })
    .map(Number)
}

beforeEach(async () => {
  dir = mkdtempSync(join(tmpdir(), 'ogee-start-'))
  port = await freePort()
  running = []
})

afterEach(async () => {
  for (const { child, ended } of running) {
    child.kill('SIGTERM')
    await ended
  }
  for (const pid of processesOfOurs()) process.kill(pid, 'SIGKILL')
  rmSync(dir, { recursive: true, force: true })
})

describe('npm start', () => {
  test('says its address, keeps demo accounts to itself, refuses a second start, and stops all on SIGTERM', async () => {
    const first = start()
    await until('ready', isReady, first)
    await until('address', () => first.said().includes(`http://127.0.0.1:${port}`), first)
    const accounts = join(dir, 'demo-accounts.json')
    expect(statSync(accounts).mode & 0o777).toBe(0o600)
    const { people, token } = JSON.parse(readFileSync(accounts, 'utf8')) as {
      people: { role: string }[]
      token: string
    }
    expect(people.map(({ role }) => role)).toEqual(['administrator', 'engineer', 'operator', 'auditor'])
    expect(token).toMatch(/^ogee_[0-9A-Za-z]{8}_[0-9A-Za-z]{36}$/)

    const second = start()
    expect(await second.ended).toBe(75)
    expect(second.said()).toContain(`already running as process ${first.child.pid}`)
    expect(await isReady()).toBe(true)

    first.child.kill('SIGTERM')
    expect(await first.ended).toBe(0)
    expect(processesOfOurs()).toEqual([])
    expect(existsSync(join(dir, 'run.lock'))).toBe(false)
  })

  test('a SIGTERM to npm alone stops all of it, too', async () => {
    const started = startByNpm()
    await until('ready', isReady, started)
    started.child.kill('SIGTERM')
    await started.ended
    await until('all gone', () => processesOfOurs().length === 0, started)
    expect(existsSync(join(dir, 'run.lock'))).toBe(false)
  })

  test('a kill -9 of everything, or of the supervisor alone, leaves nothing that stops the next start', async () => {
    const first = start()
    await until('ready', isReady, first)
    const before = readFileSync(join(dir, 'demo-accounts.json'), 'utf8')
    first.child.kill('SIGKILL')
    await first.ended
    const second = start()
    await until(
      'ready again',
      async () => second.child.exitCode === null && second.said().includes('http://') && (await isReady()),
      second,
    )
    for (const pid of processesOfOurs()) process.kill(pid, 'SIGKILL')
    await second.ended
    const third = start()
    await until('ready a third time', isReady, third)
    expect(readFileSync(join(dir, 'demo-accounts.json'), 'utf8')).toBe(before)
  })

  test('a killed server and a killed database are started again by themselves', async () => {
    const first = start()
    await until('ready', isReady, first)
    const serverPid = () =>
      processesOfOurs().find((pid) => readFileSync(`/proc/${pid}/cmdline`, 'utf8').includes('main.mjs'))
    const databasePid = () => Number(readFileSync(join(dir, 'mariadb.pid'), 'utf8'))
    const before = serverPid()
    process.kill(before ?? 0, 'SIGKILL')
    await until('another server', async () => serverPid() !== before && (await isReady()), first)
    const old = databasePid()
    process.kill(old, 'SIGKILL')
    await until(
      'another database',
      async () => existsSync(join(dir, 'mariadb.pid')) && databasePid() !== old && (await isReady()),
      first,
    )
    expect(first.child.exitCode).toBe(null)
  })
})

describe('npm run dev', () => {
  test('serves the page from its source, its reloads and the interface at one port, and starts once', async () => {
    const dev = start('--dev')
    await until('ready', isReady, dev)
    const at = `http://127.0.0.1:${port}`
    const page = await fetch(`${at}/bench`, { headers: { accept: 'text/html' } })
    expect(await page.text()).toContain('/@vite/client')
    const source = await fetch(`${at}/src/app/main.tsx`)
    expect([source.status, source.headers.get('content-type')]).toEqual([200, 'text/javascript'])
    expect((await fetch(`${at}/api/v1/me`)).status).toBe(401)
    expect(await reloadSocket()).toBe(101)
    // What Vite writes while it starts is no change of ours: the server stays up.
    await sleep(3_000)
    expect(dev.said().match(/Ogee is ready/g)).toHaveLength(1)
    expect(await isReady()).toBe(true)
    dev.child.kill('SIGTERM')
    expect(await dev.ended).toBe(0)
    expect(processesOfOurs()).toEqual([])
  })
})

import { spawnSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { dropLock, takeLock } from './lock.mjs'
import { chromium, dataDir, inRoot, mariadbd, mariadbInstall, root } from './paths.mjs'

/**
 * The first step of `npm start`, `npm test` and `npm run dev`: on a machine that has nothing but Node it installs the
 * locked packages and Debian's, and builds. When all is there it takes a fraction of a second. It may import nothing
 * from node_modules, which is not there yet.
 */

const mode = process.argv[2] ?? 'start'
const configuration = 78

/** @param {string} line */
const say = (line) => process.stderr.write(`ogee: ${line}\n`)

/**
 * @param {string} sentence
 * @returns {never}
 */
function stop(sentence, status = configuration) {
  say(sentence)
  process.exit(status)
}

/** npm hands its own flags down as npm_config_*: `npm --omit=dev start` must not leave out what the build needs. */
function cleanEnvironment() {
  const env = { ...process.env }
  delete env.NODE_ENV
  for (const name of Object.keys(env)) {
    if (
      /^npm_config_(omit|include|production|only|dev|ignore_scripts|global|location|workspace|dry_run)/i.test(
        name,
      )
    ) {
      delete env[name]
    }
  }
  return env
}

/**
 * @param {string} command
 * @param {string[]} args
 */
function run(command, args, env = cleanEnvironment()) {
  const done = spawnSync(command, args, { cwd: root, env, stdio: ['ignore', 'inherit', 'inherit'] })
  if (done.error) stop(`${command} could not be started: ${done.error.message}`)
  if (done.signal) process.exit(130)
  return done.status ?? 1
}

function checkNode() {
  const [major = 0, minor = 0] = process.versions.node.split('.').map(Number)
  if (major < 20 || (major === 20 && minor < 19))
    stop(`Node ${process.versions.node} is too old: take Node 20.19 or newer.`)
}

/** The Debian packages that this mode needs and that are not there. */
function missingPackages() {
  const own = mode === 'start' && process.env.DATABASE_URL !== undefined
  const missing = []
  if (!own && !(existsSync(mariadbd) && existsSync(mariadbInstall)))
    missing.push('mariadb-server-core', 'mariadb-client-core')
  if (mode === 'test' && !existsSync(chromium)) missing.push('chromium')
  return missing
}

function installDebianPackages() {
  const missing = missingPackages()
  if (missing.length === 0) return
  const byHand = `sudo apt-get update && sudo apt-get install -y --no-install-recommends ${missing.join(' ')}`
  if (spawnSync('apt-get', ['--version']).error)
    stop(`Install ${missing.join(', ')} first; there is no apt-get here to do it.`)
  const isRoot = process.getuid?.() === 0
  if (!isRoot && spawnSync('sudo', ['-n', 'true']).status !== 0)
    stop(`Debian packages are missing. Run this once, then again what you typed:\n  ${byHand}`)
  say(`installing ${missing.join(', ')} from Debian`)
  const env = { ...cleanEnvironment(), DEBIAN_FRONTEND: 'noninteractive' }
  const prefix = isRoot ? [] : ['sudo', '-n', '--preserve-env=DEBIAN_FRONTEND']
  for (const args of [
    ['-qq', 'update'],
    ['-qq', '-y', '--no-install-recommends', 'install', ...missing],
  ]) {
    const [command = '', ...rest] = [...prefix, 'apt-get', '-o', 'DPkg::Lock::Timeout=300', ...args]
    if (run(command, rest, env) !== 0) stop(`apt-get failed. By hand:\n  ${byHand}`)
  }
}

function installLockedPackages() {
  const lock = readFileSync(inRoot('package-lock.json'))
  const wanted = createHash('sha256')
    .update(lock)
    .update(`${process.version} ${process.platform} ${process.arch}`)
    .digest('hex')
  const stamp = inRoot('node_modules/.ogee-stamp')
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === wanted) return
  say('installing the locked packages')
  const npm = process.env.npm_execpath
  const args = ['ci', '--include=dev', '--include=optional', '--no-audit', '--no-fund', '--loglevel=error']
  const status = npm ? run(process.execPath, [npm, ...args]) : run('npm', args)
  if (status !== 0) stop('npm ci failed; its message stands above.', status)
  // Last, so that an install that was killed leaves no stamp and is done again.
  writeFileSync(stamp, wanted)
}

/** Only one set-up at a time in a checkout: `npm start` and `npm test` typed together must not install over each other. */
function waitForLock() {
  mkdirSync(dataDir(), { recursive: true })
  const path = join(dataDir(), 'setup.lock')
  const pause = new Int32Array(new SharedArrayBuffer(4))
  for (let said = false; takeLock(path); said = true) {
    if (!said) say('another set-up is under way in this checkout; waiting for it')
    Atomics.wait(pause, 0, 0, 500)
  }
  process.on('exit', () => dropLock(path))
}

checkNode()
waitForLock()
installDebianPackages()
installLockedPackages()
if (mode !== 'dev') {
  const status = run(process.execPath, [inRoot('server/setup/build.mjs')])
  if (status !== 0) stop('The build failed; its message stands above.', status)
}

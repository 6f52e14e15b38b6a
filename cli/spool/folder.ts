import { createHash, randomBytes } from 'node:crypto'
import fs from 'node:fs'
import { join } from 'node:path'
import { OgeeError } from '../../shared/errors.ts'
import {
  clearParts,
  diskTrouble,
  isAlive,
  makeFolder,
  putDown,
  syncFolder,
  type Trouble,
  takeAway,
} from './disk.ts'
import { type Entry, readEntry } from './entry.ts'

/**
 * A spool folder. `pending/` holds what is to be sent, `sent/` what was sent and is not yet seen in the ledger,
 * `refused/` what the server did not take, with the problem beside each. An entry's name begins with its number, so
 * names sort in the order of writing whatever any clock says; several processes share the folder.
 */
export const places = ['pending', 'sent', 'refused'] as const
export type SpoolPlace = (typeof places)[number]

/** Numbers have as many digits, so that names sort like them. */
const digits = 12
const entryName = /^(\d{12})-([0-9a-f]{16})-([0-9a-f]{16})-[0-9a-z]+\.json$/
/** What other processes put down is looked for at most so often. */
const lookAgainMs = 1_000

type Found = { place: SpoolPlace; name: string }

export class Spool {
  readonly dir: string
  #next = 0
  /** In the middle of many that are put down together. */
  #amongMany = false
  #written = 0
  #known = { atMs: Number.NEGATIVE_INFINITY, found: new Map<string, Found>() }

  private constructor(dir: string) {
    this.dir = dir
  }

  /** Opens a folder, and makes it where it is not there yet. */
  static open(dir: string): Spool {
    for (const place of [...places, 'parts']) makeFolder(join(dir, place))
    return new Spool(dir)
  }

  /** Opens a folder that must be there. */
  static find(dir: string): Spool {
    if (!places.some((place) => fs.existsSync(join(dir, place)))) {
      throw new OgeeError(
        'input-missing',
        `${dir} is no spool folder: it has no pending/, sent/ or refused/.`,
      )
    }
    return Spool.open(dir)
  }

  /** Names of the entries there, in order. */
  names(place: SpoolPlace): string[] {
    return fs
      .readdirSync(join(this.dir, place))
      .filter((name) => entryName.test(name))
      .sort()
  }

  path(place: SpoolPlace, name: string): string {
    return join(this.dir, place, name)
  }

  /** An entry, or null when another process has moved it meanwhile. */
  read(place: SpoolPlace, name: string): Entry | null {
    const path = this.path(place, name)
    try {
      return readEntry(fs.readFileSync(path, 'utf8'), path)
    } catch (error) {
      if ((error as Trouble).code === 'ENOENT') return null
      if (error instanceof OgeeError) throw error
      throw new OgeeError('read-failed', `${path} cannot be read: ${(error as Trouble).code ?? 'unknown'}.`)
    }
  }

  /** The entry of that idempotency key where there is one: the same measurement is kept once. */
  withKey(key: string): { path: string; entry: Entry } | null {
    const found = this.#find(hashOf(key))
    if (!found) return null
    const entry = this.read(found.place, found.name)
    if (entry) return entry.key === key ? { path: this.path(found.place, found.name), entry } : null
    // Sent meanwhile, by somebody else: it is looked for once more.
    this.#known.atMs = Number.NEGATIVE_INFINITY
    const moved = this.#find(hashOf(key))
    const there = moved ? this.read(moved.place, moved.name) : null
    return moved && there?.key === key ? { path: this.path(moved.place, moved.name), entry: there } : null
  }

  /** Whether something of that name (a unit's channel and range) was put down here and is not yet let go. */
  hasOf(what: string): boolean {
    return this.#find(hashOf(what)) !== undefined
  }

  /**
   * Puts an entry down at the end of `pending/`, under what it is of. It is durable when this returns its path; one of
   * many (`isLast` false) once `sync` has returned.
   */
  add(entry: Entry, what: string, isLast = true): string {
    // Other processes write here too, for as long: what they put down meanwhile is older. Many are taken as one.
    if (!this.#amongMany) this.#next = Math.max(this.#next, this.#afterAll())
    this.#amongMany = !isLast
    const number = String(this.#next++).padStart(digits, '0')
    const own = `${process.pid.toString(36)}${(this.#written++).toString(36).padStart(4, '0')}`
    const hashes = [hashOf(entry.key), hashOf(what)]
    const name = `${[number, ...hashes, own].join('-')}.json`
    const path = this.path('pending', name)
    this.#write(path, entry, isLast)
    for (const hash of hashes) this.#known.found.set(hash, { place: 'pending', name })
    return path
  }

  #find(hash: string): Found | undefined {
    if (performance.now() - this.#known.atMs > lookAgainMs) {
      const found = new Map<string, Found>()
      for (const place of ['pending', 'sent'] as const) {
        for (const name of this.names(place)) {
          for (const one of entryName.exec(name)?.slice(2) ?? []) found.set(one, { place, name })
        }
      }
      this.#known = { atMs: performance.now(), found }
    }
    return this.#known.found.get(hash)
  }

  sync(place: SpoolPlace): void {
    if (place === 'pending') this.#amongMany = false
    syncFolder(join(this.dir, place))
  }

  /** Moves entries on to `sent/`: durable at their new place before they leave the old one. */
  sent(entries: readonly { name: string; entry: Entry }[]): void {
    for (const { name, entry } of entries) this.#write(this.path('sent', name), entry, false)
    this.sync('sent')
    for (const { name } of entries) takeAway(this.path('pending', name))
  }

  /** As it stands, with the problem beside it. */
  refuse(name: string, problem: object): void {
    const beside = this.path('refused', name.replace(/\.json$/, '.problem.json'))
    putDown(beside, `${JSON.stringify(problem, null, 2)}\n`, join(this.dir, 'parts'))
    try {
      fs.renameSync(this.path('pending', name), this.path('refused', name))
    } catch (error) {
      throw diskTrouble(beside, error)
    }
  }

  drop(place: SpoolPlace, name: string): void {
    takeAway(this.path(place, name))
  }

  clear(): void {
    clearParts(join(this.dir, 'parts'))
  }

  #write(path: string, entry: Entry, isLast: boolean): void {
    putDown(path, `${JSON.stringify(entry, null, 2)}\n`, join(this.dir, 'parts'), isLast)
  }

  #afterAll(): number {
    const last = places.flatMap((place) => this.names(place).at(-1) ?? [])
    return Math.max(0, ...last.map((name) => Number(name.slice(0, digits)))) + 1
  }

  /**
   * Runs work while no other process sends from this folder, so that entries go in order; null when another one is at
   * it. A sender that was killed holds nothing up.
   */
  async alone<T>(work: () => Promise<T>): Promise<T | null> {
    const lock = join(this.dir, 'sending.lock')
    const mine = `${process.pid} ${randomBytes(8).toString('hex')}`
    if (!takeLock(lock, mine)) return null
    try {
      return await work()
    } finally {
      giveBack(lock, mine)
    }
  }
}

const hashOf = (key: string) => createHash('sha256').update(key).digest('hex').slice(0, 16)

function takeLock(lock: string, mine: string): boolean {
  for (let look = 0; look < 3; look++) {
    try {
      fs.writeFileSync(lock, mine, { flag: 'wx', mode: 0o600 })
      return true
    } catch (error) {
      if ((error as Trouble).code !== 'EEXIST') throw diskTrouble(lock, error)
    }
    if (isHeld(lock)) return false
    // Its holder is gone. Should two take it at once, both send the same requests with the same keys: no harm.
    fs.rmSync(lock, { force: true })
  }
  return false
}

/** Only its own: in another container a process may have the same number, and has taken it meanwhile. */
function giveBack(lock: string, mine: string): void {
  try {
    if (fs.readFileSync(lock, 'utf8') === mine) fs.rmSync(lock, { force: true })
  } catch (error) {
    if ((error as Trouble).code !== 'ENOENT') throw diskTrouble(lock, error)
  }
}

function isHeld(lock: string): boolean {
  try {
    const pid = Number(fs.readFileSync(lock, 'utf8').split(' ')[0])
    // Written a moment ago by somebody who has not come to say who it is.
    if (!Number.isInteger(pid) || pid === 0) return Date.now() - fs.statSync(lock).mtimeMs < 1_000
    return pid !== process.pid && isAlive(pid)
  } catch {
    return false
  }
}

import { closeSync, openSync, readFileSync, rmSync, writeSync } from 'node:fs'

/**
 * A lock file that a crash cannot leave behind for good: it names its holder by process id and start time, so that a
 * dead holder, or another process that was given the same id, is told from a live one.
 *
 * @typedef {{ pid: number, started: string, [fact: string]: unknown }} Holder
 */

/**
 * When the process started, in clock ticks since boot; '' when there is no such process or it has ended.
 *
 * @param {number} pid
 */
export function startOf(pid) {
  try {
    const fields = readFileSync(`/proc/${pid}/stat`, 'utf8')
      .replace(/^.*\) /s, '')
      .split(' ')
    return fields[0] === 'Z' ? '' : (fields[19] ?? '')
  } catch {
    return ''
  }
}

/**
 * @param {string} path
 * @returns {Holder | undefined} the live holder, if there is one
 */
export function holderOf(path) {
  try {
    const holder = /** @type {Holder} */ (JSON.parse(readFileSync(path, 'utf8')))
    return holder.started !== '' && startOf(holder.pid) === holder.started ? holder : undefined
  } catch {
    return undefined
  }
}

/**
 * Takes the lock, or gives its live holder.
 *
 * @param {string} path
 * @param {Record<string, unknown>} [facts] what others may want to know of the holder
 * @returns {Holder | undefined} undefined when the lock is ours now
 */
export function takeLock(path, facts = {}) {
  for (let tries = 0; tries < 5; tries += 1) {
    const holder = holderOf(path)
    if (holder) return holder
    rmSync(path, { force: true })
    try {
      const file = openSync(path, 'wx', 0o600)
      writeSync(file, JSON.stringify({ pid: process.pid, started: startOf(process.pid), ...facts }))
      closeSync(file)
      return undefined
    } catch (error) {
      if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'EEXIST') throw error
    }
  }
  return holderOf(path) ?? { pid: 0, started: '' }
}

/** @param {string} path */
export function dropLock(path) {
  if (holderOf(path)?.pid === process.pid) rmSync(path, { force: true })
}

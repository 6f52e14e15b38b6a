import { randomBytes } from 'node:crypto'
import fs from 'node:fs'
import { dirname, join } from 'node:path'
import { OgeeError } from '../../shared/errors.ts'

/**
 * Files that are there whole or not at all, whatever is killed: written beside, made durable, then renamed into place.
 * A full disk is 74, a place where nothing can be created 73; in both cases nothing was put down.
 */

export type Trouble = NodeJS.ErrnoException

/** Trouble of writing, in the contract's codes. */
export function diskTrouble(path: string, error: unknown): OgeeError {
  const code = (error as Trouble).code ?? 'unknown'
  return code === 'ENOSPC' || code === 'EDQUOT' || code === 'EIO'
    ? new OgeeError('read-failed', `${path} cannot be written: ${words[code] ?? code}. Nothing was put down.`)
    : new OgeeError('cannot-create', `${path} cannot be created: ${words[code] ?? code}.`)
}

const words: Readonly<Record<string, string>> = {
  ENOSPC: 'the disk is full',
  EDQUOT: 'the quota is used up',
  EACCES: 'not allowed',
  EROFS: 'the disk is read-only',
  ENOTDIR: 'a part of the path is no folder',
}

/**
 * Writes a file so that it survives a kill and a power cut: its bytes first, its name after them, the folder last. Of many
 * files the folder can be made durable once, after them all: then `isLast` is false for each, and `syncFolder` follows.
 */
export function putDown(path: string, text: string, beside: string, isLast = true): void {
  // Processes of two containers that share the folder may have the same number.
  const temporary = join(beside, `${process.pid}-${randomBytes(8).toString('hex')}.part`)
  let made = false
  try {
    const file = fs.openSync(temporary, 'wx', 0o600)
    made = true
    try {
      fs.writeFileSync(file, text)
      fs.fsyncSync(file)
    } finally {
      fs.closeSync(file)
    }
    fs.renameSync(temporary, path)
    if (isLast) syncFolder(dirname(path))
  } catch (error) {
    if (made) fs.rmSync(temporary, { force: true })
    throw diskTrouble(path, error)
  }
}

/**
 * Takes a file away; that somebody else did it first is no trouble. Not made durable: whoever finds it again after a power
 * cut finds out that it was dealt with.
 */
export function takeAway(path: string): void {
  try {
    fs.unlinkSync(path)
  } catch (error) {
    if ((error as Trouble).code !== 'ENOENT') throw diskTrouble(path, error)
  }
}

/** A new name is durable once its folder is. */
export function syncFolder(path: string): void {
  const folder = fs.openSync(path, 'r')
  try {
    fs.fsyncSync(folder)
  } finally {
    fs.closeSync(folder)
  }
}

export function makeFolder(path: string): void {
  try {
    fs.mkdirSync(path, { recursive: true, mode: 0o700 })
  } catch (error) {
    throw diskTrouble(path, error)
  }
}

/** Parts that a killed process left; those of living ones are theirs. */
export function clearParts(folder: string): void {
  for (const name of fs.readdirSync(folder)) {
    const pid = Number(/^(\d+)-[0-9a-f]+\.part$/.exec(name)?.[1])
    if (Number.isInteger(pid) && !isAlive(pid)) fs.rmSync(join(folder, name), { force: true })
  }
}

export function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0)
    return true
  } catch (error) {
    return (error as Trouble).code === 'EPERM'
  }
}

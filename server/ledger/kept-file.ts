import { open } from 'node:fs/promises'
import { join } from 'node:path'
import { checkNote } from '../../shared/ledger/check-proof.ts'
import type { Checkpoint } from '../../shared/ledger/checkpoint.ts'
import { notesIn } from '../../shared/ledger/notes.ts'
import type { Sql } from '../db/sql.ts'
import { sha256, verifyEd25519 } from './crypto.ts'
import { keyChanges, newestCheckpoint, rootAt } from './prove.ts'
import type { Signer } from './signer.ts'

/** A checkpoint takes some two hundred bytes: so many hold more than were signed at once by all servers. */
const tailBytes = 64 * 1024

/** Where a server keeps the checkpoints that it signed, outside of the database that they are about. */
export const keptFileOf = (dataDir: string): string => join(dataDir, 'ledger-checkpoints.txt')

/**
 * Appends a checkpoint and waits until it is on disk. Each server appends those that it signs; servers that share a folder
 * share the file, since what is appended in one piece stays in one piece.
 */
export async function appendKept(path: string, note: string): Promise<void> {
  const file = await open(path, 'a', 0o644)
  try {
    await file.write(note)
    await file.sync()
  } finally {
    await file.close()
  }
}

/**
 * Whether the database still holds the history that was signed: compares the largest checkpoint at the end of the file with
 * the stored tree, in O(log n) reads, and then appends the database's newest if it is larger.
 *
 * @returns null, or in a sentence how the database contradicts the file and what to do.
 */
export async function compareWithKept(sql: Sql, signer: Signer, path: string): Promise<string | null> {
  const notes = notesIn(await readTail(path))
  const crypto = { sha256, verify: verifyEd25519 }
  const changes = await keyChanges(sql)
  const signed = notes.flatMap((note): Checkpoint[] => {
    const checked = checkNote(crypto, note, signer.key, changes)
    return 'fault' in checked ? [] : [checked.checkpoint]
  })
  if (notes.length > 0 && signed.length === 0) {
    return `The checkpoints in ${path} are signed by another key than the one in force. ${remedy(path)}`
  }
  const kept = signed.reduce<Checkpoint | null>((a, b) => (a && a.size >= b.size ? a : b), null)
  const newest = await newestCheckpoint(sql)
  if (kept && kept.size > newest.size) {
    const gone = `the database's newest is over ${newest.size}: its end was cut off, or an old backup was put back`
    return `A checkpoint over ${kept.size} entries was signed and kept in ${path}; ${gone}. ${remedy(path)}`
  }
  if (kept && (await rootOrNone(sql, kept.size)) !== Buffer.from(kept.root).toString('hex')) {
    const other = "the database's history up to there is another: it was rewritten"
    return `A checkpoint over ${kept.size} entries was signed and kept in ${path}; ${other}. ${remedy(path)}`
  }
  if (newest.size > (kept?.size ?? -1)) await appendKept(path, newest.note)
  return null
}

const remedy = (path: string) =>
  `Put the right database back; or, if that history is given up for good, move ${path} away. Then start again.`

async function rootOrNone(sql: Sql, size: number): Promise<string | null> {
  try {
    return await rootAt(sql, size)
  } catch (error) {
    // Hashes of the tree that are not there are no history either; a database that does not answer is another matter.
    if (error instanceof Error && error.message.startsWith('The ledger lacks')) return null
    throw error
  }
}

async function readTail(path: string): Promise<string> {
  try {
    const file = await open(path, 'r')
    try {
      const { size } = await file.stat()
      const from = Math.max(0, size - tailBytes)
      const { bytesRead, buffer } = await file.read(Buffer.alloc(size - from), 0, size - from, from)
      return buffer.toString('utf8', 0, bytesRead)
    } finally {
      await file.close()
    }
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return ''
    throw error
  }
}

import { OgeeError } from '../../shared/errors.ts'
import type { KeptNote } from '../../shared/ledger/check/check-ledger.ts'
import { notesIn } from '../../shared/ledger/notes.ts'
import { readText } from '../files.ts'
import type { Io } from '../io.ts'

const maxBytes = 256 * 1024 * 1024

/** Every checkpoint in a file: one that somebody kept, or the file to which a server appends its own. */
export async function readKept(io: Io, path: string): Promise<KeptNote[]> {
  const tooLarge = () => new OgeeError('invalid-document', `${path} is over 256 MiB.`)
  // An editor may have taken the last line end away.
  const notes = notesIn(`${await readText(io, path, maxBytes, tooLarge)}\n`)
  if (notes.length === 0) throw new OgeeError('invalid-document', `${path} holds no checkpoint of a ledger.`)
  return notes.map((note) => ({ name: `the checkpoint over ${note.split('\n')[1]} kept in ${path}`, note }))
}

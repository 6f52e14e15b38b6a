import { createHash } from 'node:crypto'
import fs from 'node:fs'
import { join } from 'node:path'
import * as z from 'zod'
import { keyStatement } from '../../shared/contract/proof.ts'
import { OgeeError } from '../../shared/errors.ts'
import { checkNote, checkProof } from '../../shared/ledger/check-proof.ts'
import type { LedgerKey } from '../../shared/ledger/checkpoint.ts'
import { notesIn } from '../../shared/ledger/notes.ts'
import { parseJson, readFileText, streamText } from '../files.ts'
import type { Io } from '../io.ts'
import { crypto } from './crypto.ts'
import { designName, names } from './export-folder.ts'

export type FolderReport = {
  ok: boolean
  records: number
  revisions: number
  checkpoints: number
  /** How many disagreements, and the first hundred of them. */
  found: number
  faults: string[]
}

const maxBytes = 256 * 1024 * 1024
const tooLarge = () => new OgeeError('invalid-document', 'A file of the folder is over 256 MiB.')

/**
 * Checks an exported folder without any server: each proof under the key, each record and revision against its proof, each
 * checkpoint's signature, and that every proof leads to one of the checkpoints or to a signed one of its own.
 */
export async function checkFolder(io: Io, folder: string, key: LedgerKey): Promise<FolderReport> {
  const read = async (name: string) => (await readFileText(join(folder, name), maxBytes, tooLarge)).text
  const faults: string[] = []
  let found = 0
  const say = (message: string) => {
    found++
    if (faults.length < 100) faults.push(message)
  }
  const statements = z.array(keyStatement).safeParse(parseJson(await read(names.keys), names.keys))
  if (!statements.success) say(`${names.keys} holds no changes of a key.`)
  const notes = notesIn(await read(names.checkpoints))
  for (const note of notes) {
    const checked = checkNote(crypto, note, key, statements.data ?? [])
    if ('fault' in checked) say(`The checkpoint over ${note.split('\n')[1]}: ${checked.message}`)
  }
  const revisions = new Map<string, string | null>()
  const records = lines(io, join(folder, names.records))
  let count = 0
  for await (const line of lines(io, join(folder, names.proofs))) {
    count++
    const record = await records.next()
    const message = checkOne(line, record.done ? null : record.value, key, folder, revisions)
    if (message !== null) say(`Line ${count}: ${message}`)
    if (io.stderrIsTerminal && count % 10_000 === 0) io.say(`ogee: ${count} proofs`)
  }
  if (!(await records.next()).done) say(`${names.records} has more lines than ${names.proofs}.`)
  return {
    ok: found === 0,
    records: count,
    revisions: revisions.size,
    checkpoints: notes.length,
    found,
    faults,
  }
}

function checkOne(
  line: string,
  record: string | null,
  key: LedgerKey,
  folder: string,
  revisions: Map<string, string | null>,
): string | null {
  const checked = checkProof(crypto, jsonOrNull(line), key)
  if (!checked.ok) return checked.message
  if (record !== checked.record) return `${names.records} has another record there than its proof.`
  const { design, revision, designHash } = JSON.parse(checked.record) as Record<string, string>
  const name = designName(String(design), Number(revision))
  if (!revisions.has(name)) revisions.set(name, hashOf(join(folder, names.designs, name)))
  return revisions.get(name) === designHash ? null : `${names.designs}/${name} is not what was released.`
}

function jsonOrNull(text: string): unknown {
  try {
    return JSON.parse(text)
  } catch {
    return null
  }
}

function hashOf(path: string): string | null {
  try {
    return createHash('sha256').update(fs.readFileSync(path)).digest('hex')
  } catch {
    return null
  }
}

async function* lines(io: Io, path: string): AsyncGenerator<string> {
  let rest = ''
  for await (const piece of streamText(io, path)) {
    const parts = `${rest}${piece}`.split('\n')
    rest = parts.pop() ?? ''
    yield* parts
  }
  if (rest !== '') yield rest
}

import fs from 'node:fs'
import { OgeeError } from '../shared/errors.ts'
import type { Io } from './io.ts'
import { placeInJson } from './json-place.ts'

/** Reads and writes whole files with the exit codes of the contract: 66 missing, 74 unreadable, 73 not creatable. */

const codeOf = (error: unknown) =>
  error instanceof Error && 'code' in error ? String(error.code) : 'unknown'

export type FileText = { text: string; mode: number }

/** The text of a file, or of standard input for `-`. At most `limit` bytes; more is `tooLarge`. */
export async function readText(
  io: Pick<Io, 'stdin' | 'stdinIsTerminal' | 'say'>,
  path: string,
  limit: number,
  tooLarge: () => OgeeError,
): Promise<string> {
  if (path !== '-') return (await readFileText(path, limit, tooLarge)).text
  if (io.stdinIsTerminal) io.say('ogee: reading standard input; end it with Ctrl-D.')
  try {
    return decode(await gathered(io.stdin, limit, tooLarge), 'Standard input')
  } catch (error) {
    throw error instanceof OgeeError ? error : unreadable('Standard input', error)
  }
}

async function gathered(
  stream: AsyncIterable<Uint8Array>,
  limit: number,
  tooLarge: () => OgeeError,
): Promise<Uint8Array> {
  const pieces: Uint8Array[] = []
  let size = 0
  for await (const piece of stream) {
    size += piece.length
    if (size > limit) throw tooLarge()
    pieces.push(piece)
  }
  return Buffer.concat(pieces)
}

/** A file's text and mode, both of the same open file. */
export async function readFileText(
  path: string,
  limit: number,
  tooLarge: () => OgeeError,
): Promise<FileText> {
  try {
    const { bytes, mode } = isPlainFile(path)
      ? readNow(path, limit, tooLarge)
      : await readWaiting(path, limit, tooLarge)
    return { text: decode(bytes, path), mode }
  } catch (error) {
    throw error instanceof OgeeError ? error : unreadable(path, error)
  }
}

/** The text of a file or of standard input of any length, piece by piece. Throws as `readText` does. */
export async function* streamText(
  io: Pick<Io, 'stdin' | 'stdinIsTerminal' | 'say'>,
  path: string,
): AsyncGenerator<string> {
  const name = path === '-' ? 'Standard input' : path
  if (path === '-' && io.stdinIsTerminal) io.say('ogee: reading standard input; end it with Ctrl-D.')
  const pieces: AsyncIterable<Uint8Array> = path === '-' ? io.stdin : fs.createReadStream(path)
  const decoder = new TextDecoder('utf-8', { fatal: true })
  try {
    for await (const piece of pieces) yield decoded(() => decoder.decode(piece, { stream: true }), name)
    yield decoded(() => decoder.decode(), name)
  } catch (error) {
    throw error instanceof OgeeError ? error : unreadable(name, error)
  }
}

type FileBytes = { bytes: Uint8Array; mode: number }

const isPlainFile = (path: string) => fs.statSync(path, { throwIfNoEntry: false })?.isFile() === true

/** A file on a disk, at once: starting Node's threads for it would take longer than reading it. */
function readNow(path: string, limit: number, tooLarge: () => OgeeError): FileBytes {
  const file = fs.openSync(path, 'r')
  try {
    const { size, mode } = fs.fstatSync(file)
    if (size > limit) throw tooLarge()
    return { bytes: fs.readFileSync(file), mode }
  } finally {
    fs.closeSync(file)
  }
}

/** A pipe or the like, which may keep us waiting: Ctrl-C must get through. */
async function readWaiting(path: string, limit: number, tooLarge: () => OgeeError): Promise<FileBytes> {
  const file = await fs.promises.open(path, 'r')
  try {
    const { mode } = await file.stat()
    const stream = file.createReadStream({ autoClose: false }) as AsyncIterable<Uint8Array>
    return { bytes: await gathered(stream, limit, tooLarge), mode }
  } finally {
    await file.close()
  }
}

function unreadable(path: string, error: unknown): OgeeError {
  const code = codeOf(error)
  return code === 'ENOENT' || code === 'ENOTDIR'
    ? new OgeeError('input-missing', `There is no file ${path}.`, { facts: { file: path } })
    : new OgeeError('read-failed', `${path} cannot be read: ${code}.`, { facts: { file: path } })
}

function decode(bytes: Uint8Array, name: string): string {
  return decoded(() => new TextDecoder('utf-8', { fatal: true }).decode(bytes), name)
}

function decoded(read: () => string, name: string): string {
  try {
    return read()
  } catch (cause) {
    throw new OgeeError('invalid-document', `${name} is not UTF-8 text. Save it as UTF-8.`, { cause })
  }
}

export async function createFile(path: string, bytes: Uint8Array): Promise<void> {
  await fs.promises.writeFile(path, bytes).catch((error: unknown) => {
    const code = codeOf(error)
    throw code === 'ENOSPC' || code === 'EIO'
      ? new OgeeError('read-failed', `${path} cannot be written: ${code}.`)
      : new OgeeError('cannot-create', `${path} cannot be created: ${code}.`)
  })
}

/** Parses JSON and names the place where it stops being JSON. */
export function parseJson(text: string, name: string): unknown {
  try {
    return JSON.parse(text)
  } catch (cause) {
    throw new OgeeError('malformed-json', `${name} is not JSON at ${placeInJson(text)}.`, { cause })
  }
}

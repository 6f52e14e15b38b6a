import { OgeeError } from '../../shared/errors.ts'
import { type LedgerKey, parseVerifierKey } from '../../shared/ledger/checkpoint.ts'
import { parseJson, readFileText, readText } from '../files.ts'
import type { Io } from '../io.ts'
import { crypto } from './crypto.ts'

const keyMaxBytes = 4 * 1024
const proofMaxBytes = 16 * 1024 * 1024

/** The verifier key of a file such as ogee.pub. */
export async function readKey(path: string): Promise<LedgerKey> {
  const tooLarge = () => notAKey(path)
  const { text } = await readFileText(path, keyMaxBytes, tooLarge)
  return keyOf(text, path)
}

/** A verifier key from its line; `from` is named when it is none. */
export function keyOf(text: string, from: string): LedgerKey {
  const key = parseVerifierKey(crypto.sha256, text)
  if (!key) throw notAKey(from)
  return key
}

const notAKey = (from: string) =>
  new OgeeError('invalid-document', `${from} is no public key of a ledger: one line, name+hash+key.`)

/** Any JSON of a file, or of standard input for `-`. */
export async function readJson(io: Io, path: string): Promise<unknown> {
  const tooLarge = () => new OgeeError('invalid-document', `${path} is over 16 MiB. A proof takes a few kB.`)
  return parseJson(await readText(io, path, proofMaxBytes, tooLarge), path === '-' ? 'Standard input' : path)
}

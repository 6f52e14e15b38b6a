import { createPrivateKey, generateKeyPairSync, hkdfSync, type KeyObject } from 'node:crypto'
import { mkdir, open, readFile, rename, rm } from 'node:fs/promises'
import { dirname } from 'node:path'
import { OgeeError } from '../../shared/errors.ts'
import { sameBytes } from '../../shared/ledger/hash.ts'
import { rawPublicKey } from './crypto.ts'

/** Reads the private key (PKCS 8, PEM); null when there is no file. */
export async function readKeyFile(path: string): Promise<KeyObject | null> {
  let text: string
  try {
    text = await readFile(path, 'utf8')
  } catch (cause) {
    if ((cause as NodeJS.ErrnoException).code === 'ENOENT') return null
    throw new OgeeError('configuration', `The ledger key ${path} cannot be read.`, { cause })
  }
  try {
    const key = createPrivateKey(text)
    if (key.asymmetricKeyType === 'ed25519') return key
  } catch {
    // Falls through: the text is no key at all, which the same sentence says.
  }
  throw new OgeeError('configuration', `The ledger key ${path} is not an Ed25519 private key in PEM form.`)
}

/** Makes a key and keeps it, readable by the owner alone and on disk before anybody relies on it. */
export async function writeKeyFile(path: string): Promise<KeyObject> {
  const { privateKey } = generateKeyPairSync('ed25519')
  const folder = dirname(path)
  await mkdir(folder, { recursive: true })
  const file = await open(path, 'wx', 0o600)
  try {
    await file.writeFile(privateKey.export({ type: 'pkcs8', format: 'pem' }))
    await file.sync()
  } finally {
    await file.close()
  }
  await syncFolder(folder)
  return privateKey
}

/** A new name is durable once its folder is. */
async function syncFolder(path: string): Promise<void> {
  const folder = await open(path, 'r')
  try {
    await folder.sync()
  } finally {
    await folder.close()
  }
}

const nextOf = (path: string) => `${path}.next`

/** Makes the key that is to come into force, beside the one that is; one that never did is written over. */
export async function writeNextKey(path: string): Promise<KeyObject> {
  await rm(nextOf(path), { force: true })
  return writeKeyFile(nextOf(path))
}

/**
 * The private key in the file. When the key in force is the one that was to come, because the process died between the
 * database and the file, it takes its place now. A key that is replaced is not kept: what it signed still checks.
 */
export async function adoptKeyFile(path: string, inForce: Uint8Array): Promise<KeyObject | null> {
  const next = await readKeyFile(nextOf(path))
  if (!next || !sameBytes(rawPublicKey(next), inForce)) return readKeyFile(path)
  // Another process that shares the folder may do the same at this moment: then it is done.
  await rename(nextOf(path), path).catch((cause: NodeJS.ErrnoException) => {
    if (cause.code !== 'ENOENT') throw cause
  })
  await syncFolder(dirname(path))
  return next
}

/**
 * A secret for another purpose, from the same file: so that it stands in no database dump and all servers that share the
 * ledger key share it too.
 */
export function derivedSecret(privateKey: KeyObject, purpose: string): string {
  const seed = privateKey.export({ type: 'pkcs8', format: 'der' })
  return Buffer.from(hkdfSync('sha256', seed, 'ogee', purpose, 32)).toString('base64url')
}

import fs from 'node:fs'
import { join } from 'node:path'
import { OgeeError } from '../../shared/errors.ts'

/** Names within an exported folder, for who writes it and who checks it. */
export const names = {
  readme: 'README.txt',
  program: 'ogee.mjs',
  key: 'ogee.pub',
  keys: 'keys.json',
  checkpoints: 'checkpoints.txt',
  records: 'records.ndjson',
  proofs: 'proofs.ndjson',
  designs: 'designs',
} as const

export const designName = (key: string, revision: number) => `${key}-${revision}.json`

export const readme = (count: number, ledger: string) => `Records of the ledger ${ledger}, exported by ogee.

${names.records}      ${count} records, one a line: the very bytes that were hashed
${names.proofs}       the proof of each, in the same order
${names.checkpoints}     every signed checkpoint
${names.key}            the public key; compare it with one that you kept from before
${names.keys}           changes of the key, each signed by both keys
${names.designs}/             the design revisions that the records name, exactly as released
${names.program}            the program that checks all of this, without a server (Node.js 20 or later)

All of it:      node ${names.program} ledger check . --key ${names.key}
One record:     sed -n 1p ${names.proofs} | node ${names.program} proof check - --key ${names.key}
`

/** Makes the folder, which must not be there or be empty: nothing of anybody's is written over. */
export function makeExportFolder(path: string): void {
  try {
    fs.mkdirSync(join(path, names.designs), { recursive: true })
  } catch (error) {
    throw cannotCreate(path, error)
  }
  const found = fs.readdirSync(path).filter((name) => name !== names.designs)
  if (found.length > 0 || fs.readdirSync(join(path, names.designs)).length > 0) {
    throw new OgeeError('cannot-create', `${path} is not empty. Name a folder that is not there yet.`)
  }
}

/** A file that grows line by line and is on disk when it is closed. */
export function lineFile(path: string): { add: (line: string) => void; close: () => void } {
  const file = opened(path)
  return {
    add: (line) => attempt(path, () => fs.writeSync(file, `${line}\n`)),
    close: () =>
      attempt(path, () => {
        fs.fsyncSync(file)
        fs.closeSync(file)
      }),
  }
}

function opened(path: string): number {
  try {
    return fs.openSync(path, 'wx')
  } catch (error) {
    throw cannotCreate(path, error)
  }
}

function attempt(path: string, act: () => void): void {
  try {
    act()
  } catch (error) {
    throw new OgeeError('read-failed', `${path} cannot be written: ${codeOf(error)}.`)
  }
}

const codeOf = (error: unknown) => (error as NodeJS.ErrnoException).code ?? 'unknown'
const cannotCreate = (path: string, error: unknown) =>
  new OgeeError('cannot-create', `${path} cannot be created: ${codeOf(error)}.`)

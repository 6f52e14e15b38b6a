import type { KeyObject } from 'node:crypto'
import { randomBytes } from 'node:crypto'
import { OgeeError } from '../../shared/errors.ts'
import { keyName, verifierKey } from '../../shared/ledger/checkpoint.ts'
import { sameBytes } from '../../shared/ledger/hash.ts'
import type { Database } from '../db/connection.ts'
import { type Sql, sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import { sha256 } from './crypto.ts'
import { adoptKeyFile, derivedSecret, readKeyFile, writeKeyFile } from './key-file.ts'
import { type KeyInForce, keyInForce } from './keys.ts'
import { insertLeaves, newLeaf } from './leaves.ts'
import { lockHead, writeCheckpoint } from './sequence.ts'
import { type Signer, signerOf } from './signer.ts'

export type OpenedLedger = { signer: Signer; sessionSecret: string; keyFile: string }

/**
 * Finds the key in force, or makes the first one.
 * Guarantee: under the lock of the head row, so two servers that start together agree on one key; a server whose key file
 * differs from the database does not start (`ledger-key-differs`, which names both).
 */
export async function openLedger(
  database: Database,
  options: { keyFile: string; ledgerName: string | null; now: () => Date },
): Promise<OpenedLedger> {
  const { signer, privateKey } = await transaction(database, async (sql) => {
    const head = await lockHead(sql)
    const inForce = await keyInForce(sql)
    const onDisk = inForce
      ? await adoptKeyFile(options.keyFile, inForce.publicKey)
      : await readKeyFile(options.keyFile)
    if (inForce) return existing(inForce, onDisk, options)
    const made = onDisk ?? (await writeKeyFile(options.keyFile))
    const signer = signerOf(options.ledgerName ?? `ogee-${randomBytes(4).toString('hex')}/ledger`, made)
    await enterFirstKey(sql, signer, options.now())
    await writeCheckpoint(sql, head, signer, options.now())
    return { signer, privateKey: made }
  })
  return { signer, sessionSecret: derivedSecret(privateKey, 'session cookie'), keyFile: options.keyFile }
}

/**
 * Takes up the key that another process put in force, once its file is here. Those that hold the signer sign with it from
 * then on. Throws `ledger-key-differs` until then.
 */
export async function reloadSigner(database: Database, signer: Signer, keyFile: string): Promise<void> {
  const inForce = await keyInForce(database.sql)
  if (!inForce) return
  const onDisk = await adoptKeyFile(keyFile, inForce.publicKey)
  Object.assign(signer, existing(inForce, onDisk, { keyFile, ledgerName: null }).signer)
}

function existing(
  inForce: KeyInForce,
  onDisk: KeyObject | null,
  options: { keyFile: string; ledgerName: string | null },
): { signer: Signer; privateKey: KeyObject } {
  const wanted = keyName(sha256, inForce)
  if (!onDisk) {
    throw new OgeeError(
      'ledger-key-differs',
      `The ledger is signed by ${wanted}, whose private key should be in ${options.keyFile}: there is no such file.`,
    )
  }
  const signer = signerOf(inForce.name, onDisk)
  if (!sameBytes(signer.key.publicKey, inForce.publicKey)) {
    throw new OgeeError(
      'ledger-key-differs',
      `The ledger is signed by ${wanted}, but ${options.keyFile} holds ${signer.keyName}.`,
    )
  }
  if (options.ledgerName !== null && options.ledgerName !== inForce.name) {
    throw new OgeeError(
      'configuration',
      `OGEE_LEDGER_NAME is ${options.ledgerName}, but the ledger was named ${inForce.name} at first start.`,
    )
  }
  return { signer, privateKey: onDisk }
}

async function enterFirstKey(sql: Sql, signer: Signer, at: Date): Promise<void> {
  await sql.run('INSERT INTO ledger_keys (number, name, public_key, at) VALUES ?', [
    [[1, signer.key.name, signer.key.publicKey, sqlTime(at)]],
  ])
  const body = { format: 'ogee.key/1', key: verifierKey(sha256, signer.key), replaces: null }
  await insertLeaves(sql, [newLeaf('key', at.toISOString(), body)])
}

import type { LedgerKeyRow } from '../../shared/contract/ledger-checkpoints.ts'
import { verifierKey } from '../../shared/ledger/checkpoint.ts'
import { signKeyChange } from '../../shared/ledger/key-chain.ts'
import { sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { sha256 } from '../ledger/crypto.ts'
import { writeNextKey } from '../ledger/key-file.ts'
import { keyInForce, requireInForce } from '../ledger/keys.ts'
import { insertLeaves, newLeaf } from '../ledger/leaves.ts'
import { reloadSigner } from '../ledger/open-ledger.ts'
import { lockHead } from '../ledger/sequence.ts'
import { signerOf } from '../ledger/signer.ts'

/**
 * Puts a new key in the place of the one that signs the ledger.
 * Guarantee: under the lock of the head row, so that no checkpoint is signed by the old key once the new one is in force;
 * the change is a leaf, signed by both, and what the old key signed still checks. The new private key is on disk before
 * anybody relies on it, and takes the file's place after the commit, or at the next start when the process dies between.
 */
export async function changeKey(
  deps: Pick<Deps, 'database' | 'signer' | 'keyFile' | 'now' | 'notifyLedger'>,
  { by, reason }: { by: string; reason: string },
): Promise<LedgerKeyRow> {
  const { database, signer, keyFile, now } = deps
  const changed = await transaction(database, async (sql) => {
    await lockHead(sql)
    await requireInForce(sql, signer)
    const number = ((await keyInForce(sql))?.number ?? 0) + 1
    const next = signerOf(signer.key.name, await writeNextKey(keyFile))
    const statement = signKeyChange(sha256, signer, next)
    const at = now()
    await sql.run('INSERT INTO ledger_keys (number, name, public_key, at, statement) VALUES ?', [
      [[number, next.key.name, next.key.publicKey, sqlTime(at), JSON.stringify(statement)]],
    ])
    const body = { ...statement, changedBy: by, reason }
    await insertLeaves(sql, [newLeaf('key', at.toISOString(), body)])
    return { number, key: verifierKey(sha256, next.key), at: at.toISOString(), statement }
  })
  await reloadSigner(database, signer, keyFile)
  deps.notifyLedger()
  return changed
}

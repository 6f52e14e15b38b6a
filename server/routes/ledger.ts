import { getCheckpoint, getLedgerKey } from '../../shared/contract/ledger.ts'
import { verifierKey } from '../../shared/ledger/checkpoint.ts'
import type { Serve } from '../http/serve.ts'
import { sha256 } from '../ledger/crypto.ts'
import type { RouteDeps } from './route-deps.ts'

export function ledgerRoutes(serve: Serve, { database, signer }: RouteDeps): void {
  serve(getCheckpoint, async () => {
    const [newest] = await database.sql.rows<{ note: string }>(
      'SELECT note FROM ledger_checkpoints ORDER BY number DESC LIMIT 1',
    )
    if (!newest) throw new Error('The ledger was opened without a checkpoint.')
    return newest.note
  })

  serve(getLedgerKey, async () => `${verifierKey(sha256, signer.key)}\n`)
}

import { getCheckpoint, getConsistency, getLedgerKey, getProof } from '../../shared/contract/ledger.ts'
import { listCheckpoints, listKeys, postKey } from '../../shared/contract/ledger-checkpoints.ts'
import { listEntries, listStrays } from '../../shared/contract/ledger-entries.ts'
import { OgeeError } from '../../shared/errors.ts'
import { verifierKey } from '../../shared/ledger/checkpoint.ts'
import { changeKey } from '../commands/change-key.ts'
import { ReadyLines, type Serve } from '../http/serve.ts'
import { readCheckpoints, readKeys } from '../ledger/checkpoints.ts'
import { sha256 } from '../ledger/crypto.ts'
import { entryLines } from '../ledger/entries.ts'
import { newestCheckpoint, proveConsistency, proveRecord } from '../ledger/prove.ts'
import { readStrays } from '../ledger/strays.ts'
import { mayProveRecord, requireEveryDesign } from '../policies/may-see.ts'
import type { RouteDeps } from './route-deps.ts'

export function ledgerRoutes(serve: Serve, deps: RouteDeps): void {
  const { database, signer } = deps

  serve(getCheckpoint, async () => (await newestCheckpoint(database.sql)).note)

  serve(getLedgerKey, async () => `${verifierKey(sha256, signer.key)}\n`)

  serve(getConsistency, async ({ query }) => proveConsistency(database.sql, query))

  serve(getProof, async ({ params, principal }) => {
    const attributes = ['stationId', 'design'] as const
    const found = await database.models.records.findByPk(params.recordId, { attributes: [...attributes] })
    if (!found || !mayProveRecord(principal, found.get())) {
      throw new OgeeError('not-found', 'There is no such record, or it is not open to you.')
    }
    return proveRecord(database.sql, params.recordId)
  })

  serve(listKeys, async () => ({ items: await readKeys(database.sql) }))

  serve(postKey, async ({ body, principal }) => changeKey(deps, { by: principal.name, reason: body.reason }))

  serve(listCheckpoints, async ({ query }) => readCheckpoints(database.sql, query))

  serve(listEntries, async ({ query, principal }) => {
    requireEveryDesign(principal)
    return new ReadyLines(entryLines(database, query))
  })

  serve(listStrays, async ({ query, principal }) => {
    requireEveryDesign(principal)
    return readStrays(database.sql, query.after)
  })
}

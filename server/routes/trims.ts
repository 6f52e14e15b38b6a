import { getCertificate, getTrim, listTrims, postTrim } from '../../shared/contract/trims.ts'
import { OgeeError } from '../../shared/errors.ts'
import { readCertificate } from '../commands/certificate/read-certificate.ts'
import { listRecords } from '../commands/list-records.ts'
import { readStored, recordJson } from '../commands/recording/read-stored.ts'
import { ReadyFile, ReadyJson, type Serve } from '../http/serve.ts'
import { maySeeRecord } from '../policies/may-see.ts'
import type { RouteDeps } from './route-deps.ts'

export function trimRoutes(serve: Serve, deps: RouteDeps): void {
  const { database, record } = deps

  serve(postTrim, async ({ principal, body, rawBody, idempotencyKey }) => {
    const made = await record({ principal, request: body, rawBody, key: idempotencyKey })
    return new ReadyJson(recordJson(made.record, made.replayed))
  })

  serve(listTrims, async ({ query, principal }) => listRecords(database, query, principal))

  serve(getTrim, async ({ params, principal }) => {
    const found = (
      await database.models.records.findByPk(params.id, { attributes: ['stationId', 'design'] })
    )?.get()
    const stored =
      found && maySeeRecord(principal, found)
        ? (await readStored(database.sql, [params.id])).get(params.id)
        : undefined
    if (!stored) throw new OgeeError('not-found', 'There is no such record, or it is not open to you.')
    return new ReadyJson(recordJson(stored))
  })

  serve(getCertificate, async ({ params, principal }) => {
    const facts = await readCertificate(database, params.id, principal)
    const { unit, channel, number } = facts.subject
    const name = `certificate ${unit} channel ${channel} record ${number}.pdf`
    // The library for PDF takes a tenth of a second to load, which a server that starts again can do without.
    const { renderCertificate } = await import('../certificate/render.ts')
    return new ReadyFile(await renderCertificate(facts, deps.now()), name)
  })
}

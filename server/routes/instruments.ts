import {
  listInstruments,
  patchInstrument,
  postInstrument,
  putInstrumentRule,
} from '../../shared/contract/instruments.ts'
import { changeInstrument } from '../commands/instruments/change-instrument.ts'
import { createInstrument } from '../commands/instruments/create-instrument.ts'
import { overdueAllowed, setOverdueAllowed } from '../commands/instruments/overdue-rule.ts'
import type { Serve } from '../http/serve.ts'
import { instrumentReply } from '../models/instrument.ts'
import { plain } from '../models/table.ts'
import type { RouteDeps } from './route-deps.ts'

export function instrumentRoutes(serve: Serve, deps: RouteDeps): void {
  const { database } = deps

  serve(listInstruments, async () => {
    const [found, allowed] = await Promise.all([
      database.models.instruments.findAll({ order: ['id'] }),
      overdueAllowed(database.sql),
    ])
    const rows = plain(found)
    const live = rows.filter((row) => row.retiredAt === null)
    const retired = rows.filter((row) => row.retiredAt !== null)
    return { items: [...live, ...retired].map(instrumentReply), overdueAllowed: allowed }
  })

  serve(postInstrument, async ({ body, principal }) =>
    instrumentReply(await createInstrument(deps, body, principal.name)),
  )

  serve(patchInstrument, async ({ params, body, principal, ifMatch, response }) => {
    const asked = { id: params.id, change: body, by: principal.name, ifMatch }
    const reply = instrumentReply(await changeInstrument(deps, asked))
    response.set('ETag', reply.etag)
    return reply
  })

  serve(putInstrumentRule, async ({ body }) => {
    await setOverdueAllowed(database.sql, body.overdueAllowed)
    return body
  })
}

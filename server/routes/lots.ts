import type { Response } from 'express'
import {
  postClose,
  postExpected,
  postLot,
  postReference,
  postSignOff,
} from '../../shared/contract/lot-acts.ts'
import {
  getLot,
  type LotDetail,
  listLots,
  listLotUnits,
  listMissing,
  listStationMonths,
} from '../../shared/contract/lots.ts'
import { LotBoards } from '../commands/lots/board.ts'
import { closeLot } from '../commands/lots/close-lot.ts'
import { findLot, type LotHead } from '../commands/lots/find-lot.ts'
import { markReference } from '../commands/lots/mark-reference.ts'
import { expectUnits, openLot } from '../commands/lots/open-lot.ts'
import { readLotUnits } from '../commands/lots/read-lot-units.ts'
import { readLot, readLots } from '../commands/lots/read-lots.ts'
import { signOffLot } from '../commands/lots/sign-off-lot.ts'
import { readStationMonths } from '../commands/lots/station-months.ts'
import { bounded } from '../db/sql.ts'
import type { Principal } from '../http/principal.ts'
import type { Serve } from '../http/serve.ts'
import { maySeeUnits, requireDesign } from '../policies/may-see.ts'
import type { RouteDeps } from './route-deps.ts'

export function lotRoutes(serve: Serve, deps: RouteDeps): void {
  const { sql } = deps.database
  const boards = new LotBoards()

  const tagged = async (
    { response, principal }: { response: Response; principal: Principal },
    head: LotHead,
  ): Promise<LotDetail> => {
    const { detail } = await readLot(sql, head, await boards.read(sql, head))
    response.set('ETag', detail.etag)
    return maySeeUnits(principal) ? detail : withoutUnits(detail)
  }

  serve(listLots, async ({ query, principal }) => {
    const only = principal.kind === 'token' ? principal.designs : null
    return readLots(deps.database, boards, { ...query, only })
  })

  serve(getLot, async ({ params, principal, response }) =>
    tagged({ response, principal }, await findLot(sql, named(principal, params))),
  )

  serve(listLotUnits, async ({ params, query, principal }) => {
    const head = await findLot(sql, named(principal, params))
    return readLotUnits(sql, head, await boards.read(sql, head), query)
  })

  serve(listMissing, async ({ params, query, principal }) => {
    const head = await findLot(sql, named(principal, params))
    const { standings } = await readLot(sql, head, await boards.read(sql, head))
    const { after, limit } = query
    const rest = standings.missing.filter((serial) => after === undefined || serial > after)
    return { items: rest.slice(0, limit), next: rest.length > limit ? rest[limit - 1]! : null }
  })

  serve(postLot, async ({ body, principal, response }) => {
    requireDesign(principal, body.design)
    return tagged({ response, principal }, await openLot(deps, { ...body, by: principal.name }))
  })

  serve(postExpected, async ({ params, body, principal, response }) =>
    tagged({ response, principal }, await expectUnits(deps, { ...named(principal, params), ...body })),
  )

  serve(postClose, async ({ params, principal, response }) =>
    tagged(
      { response, principal },
      await closeLot(deps, { ...named(principal, params), by: principal.name }),
    ),
  )

  serve(postSignOff, async ({ params, body, ifMatch, principal, response }) => {
    const asked = { ...named(principal, params), ...body, by: principal.name, ifMatch }
    return tagged({ response, principal }, await signOffLot(deps, asked))
  })

  serve(postReference, async ({ params, body, principal }) => {
    requireDesign(principal, params.key)
    await markReference(deps, { design: params.key, ...body, by: principal.name })
    return body
  })

  serve(listStationMonths, async ({ params, query, principal }) => {
    requireDesign(principal, params.key)
    const to = query.to === undefined ? deps.now() : new Date(query.to)
    return { items: await readStationMonths(bounded(sql), params.key, to) }
  })
}

function named(principal: Principal, { key, lot }: { key: string; lot: string }) {
  requireDesign(principal, key)
  return { design: key, lot }
}

/** What names single units is left empty; counts stay. */
const withoutUnits = ({ signOff, ...lot }: LotDetail): LotDetail => ({
  ...lot,
  references: [],
  signOff: signOff && { ...signOff, leftOut: [] },
})

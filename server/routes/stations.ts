import { listStations, patchStation, postStation } from '../../shared/contract/stations.ts'
import { changeStation } from '../commands/change-station.ts'
import { createStation } from '../commands/create-station.ts'
import type { Serve } from '../http/serve.ts'
import { stationReply } from '../models/station.ts'
import { plain } from '../models/table.ts'
import type { RouteDeps } from './route-deps.ts'

export function stationRoutes(serve: Serve, deps: RouteDeps): void {
  serve(listStations, async () => {
    const rows = plain(await deps.database.models.stations.findAll({ order: ['name'] }))
    const live = rows.filter((row) => row.retiredAt === null)
    const retired = rows.filter((row) => row.retiredAt !== null)
    return { items: [...live, ...retired].map(stationReply) }
  })

  serve(postStation, async ({ body }) => stationReply(await createStation(deps, body.name)))

  serve(patchStation, async ({ params, body }) => {
    const changed = await changeStation(deps, params.id, body)
    deps.tokens.forget()
    return stationReply(changed)
  })
}

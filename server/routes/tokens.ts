import { deleteToken, listTokens, postToken } from '../../shared/contract/tokens.ts'
import { createToken } from '../commands/create-token.ts'
import { revokeToken } from '../commands/revoke-token.ts'
import type { Serve } from '../http/serve.ts'
import { plain } from '../models/table.ts'
import { tokenReply } from '../models/token.ts'
import type { RouteDeps } from './route-deps.ts'

export function tokenRoutes(serve: Serve, deps: RouteDeps): void {
  serve(listTokens, async () => {
    const { tokens, stations } = deps.database.models
    const rows = plain(
      await tokens.findAll({
        order: [
          ['createdAt', 'DESC'],
          ['id', 'DESC'],
        ],
      }),
    )
    const names = new Map(plain(await stations.findAll()).map((row) => [row.id, row.name]))
    return {
      items: rows.map((row) =>
        tokenReply(row, row.stationId === null ? null : (names.get(row.stationId) ?? null)),
      ),
    }
  })

  serve(postToken, async ({ body, principal }) => createToken(deps, body, principal.name))

  serve(deleteToken, async ({ params, principal }) => {
    await revokeToken(deps, params.id, principal.name)
    deps.tokens.forget()
    return null
  })
}

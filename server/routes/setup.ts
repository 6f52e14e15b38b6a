import { getSetup, postSetup } from '../../shared/contract/session.ts'
import { OgeeError } from '../../shared/errors.ts'
import { createFirstAdministrator, isSetupOpen } from '../commands/create-first-administrator.ts'
import { within } from '../http/deadline.ts'
import { localsOf } from '../http/locals.ts'
import type { Serve } from '../http/serve.ts'
import type { RouteDeps } from './route-deps.ts'
import { meReply } from './session.ts'

export function setupRoutes(serve: Serve, deps: RouteDeps): void {
  serve(getSetup, async () => ({ open: await isSetupOpen(deps.database.sql) }))

  serve(postSetup, async ({ body, request, response }) => {
    if (!deps.setup.matches(body.secret)) {
      throw new OgeeError(
        'setup-closed',
        'The secret is not the one that the server printed, or set-up is over.',
      )
    }
    const { secret: _, ...person } = body
    const made = await createFirstAdministrator(deps, person)
    await within(deps.sessions.open(request, made.id))
    localsOf(response).principal = made
    return meReply(deps, made)
  })
}

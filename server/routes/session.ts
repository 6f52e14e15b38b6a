import type { Request, Response } from 'express'
import { Passport } from 'passport'
import { Strategy as LocalStrategy } from 'passport-local'
import { deleteSession, getMe, type Me, postSession } from '../../shared/contract/session.ts'
import { OgeeError } from '../../shared/errors.ts'
import { SOLVER_VERSION } from '../../shared/solver/version.ts'
import { signIn } from '../commands/sign-in.ts'
import { within } from '../http/deadline.ts'
import type { Deps } from '../http/deps.ts'
import { localsOf } from '../http/locals.ts'
import type { PersonPrincipal, Principal } from '../http/principal.ts'
import type { Serve } from '../http/serve.ts'
import { productVersion } from '../root.ts'
import type { RouteDeps } from './route-deps.ts'

export function sessionRoutes(serve: Serve, deps: RouteDeps): void {
  const byPassword = passwordSignIn(deps)

  serve(postSession, async ({ request, response }) => {
    const person = await byPassword(request, response)
    await within(deps.sessions.open(request, person.id))
    localsOf(response).principal = person
    return meReply(deps, person)
  })

  serve(deleteSession, async ({ request, response }) => {
    await deps.sessions.end(request, response)
    return null
  })

  serve(getMe, async ({ principal }) => meReply(deps, principal))
}

function passwordSignIn(deps: Deps): (request: Request, response: Response) => Promise<PersonPrincipal> {
  const passport = new Passport()
  passport.use(
    new LocalStrategy({ usernameField: 'email', session: false }, (email, password, done) => {
      signIn(deps.database, { email, password }).then((person) => done(null, person ?? false), done)
    }),
  )
  return (request, response) =>
    new Promise((resolve, reject) => {
      const answered = (error: unknown, person: PersonPrincipal | false | null): void => {
        if (error) reject(error as Error)
        else if (person) resolve(person)
        else reject(new OgeeError('wrong-password', 'E-mail or password is wrong.'))
      }
      passport.authenticate('local', { session: false }, answered)(request, response, reject)
    })
}

export function meReply({ signer, now }: Pick<Deps, 'signer' | 'now'>, principal: Principal): Me {
  const server = {
    version: productVersion,
    solver: SOLVER_VERSION,
    ledger: signer.key.name,
    serverTime: now().toISOString(),
  }
  if (principal.kind === 'person') return { who: principal, server }
  const { kind, id, name, station, scopes, designs, expiresAt } = principal
  return {
    who: {
      kind,
      id,
      name,
      station: station?.name ?? null,
      scopes: [...scopes],
      designs: designs === null ? null : [...designs],
      expiresAt: expiresAt.toISOString(),
    },
    server,
  }
}

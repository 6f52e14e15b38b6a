import type { Access } from '../../shared/contract/endpoint.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Principal } from '../http/principal.ts'

/**
 * Refuses who may not call at all: 401 for nobody, 403 `insufficient_scope` for a token, 403 for a person's role.
 * What belongs to others within an allowed call is the business of `may-see.ts`.
 */
export function requireAccess(access: Access, principal: Principal | null): void {
  if (access === 'open') {
    // What is open and yet looks at the caller is about sessions, which tokens do not have.
    if (principal?.kind !== 'token') return
    throw new OgeeError('insufficient-scope', 'That is for people; no token can do it.')
  }
  if (!principal)
    throw new OgeeError('sign-in-required', 'Sign in, or send a token as Authorization: Bearer.')
  if (principal.kind === 'token') {
    if (access.scopes.some((scope) => principal.scopes.includes(scope))) return
    const needed = access.scopes.join(' ')
    throw new OgeeError(
      'insufficient-scope',
      needed === '' ? 'That is for people; no token can do it.' : `The token needs one of: ${needed}.`,
      { facts: { scope: needed } },
    )
  }
  if (!access.roles.includes(principal.role)) {
    throw new OgeeError(
      'forbidden',
      `That needs the role ${access.roles.join(' or ')}; yours is ${principal.role}.`,
    )
  }
}

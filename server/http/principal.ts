import type { Role, Scope } from '../../shared/contract/primitives.ts'

export type PersonPrincipal = { kind: 'person'; id: string; name: string; email: string; role: Role }
export type TokenPrincipal = {
  kind: 'token'
  id: string
  name: string
  station: { id: string; name: string } | null
  scopes: readonly Scope[]
  /** Null: every design. */
  designs: readonly string[] | null
  expiresAt: Date
}

/** Who is asking: a person by session or a station's token, never both. */
export type Principal = PersonPrincipal | TokenPrincipal

import type { Sequelize } from 'sequelize'
import type { Scope } from '../../shared/contract/primitives.ts'
import type { Token } from '../../shared/contract/tokens.ts'
import { bytes, longText, type Table, table, text, time } from './table.ts'

export type TokenRow = {
  id: string
  secretHash: Buffer
  name: string
  stationId: string | null
  /** JSON. */
  scopes: string
  /** JSON, or null for every design. */
  designs: string | null
  createdBy: string
  createdAt: Date
  expiresAt: Date
  revokedAt: Date | null
  lastUsedAt: Date | null
}

export const tokens = (sequelize: Sequelize): Table<TokenRow> =>
  table<TokenRow>(sequelize, 'tokens', {
    id: { type: text, primaryKey: true },
    secretHash: bytes,
    name: text,
    stationId: text,
    scopes: longText,
    designs: longText,
    createdBy: text,
    createdAt: time,
    expiresAt: time,
    revokedAt: time,
    lastUsedAt: time,
  })

/** Never the hash: it is nobody's business, not even the administrator's. */
export function tokenReply(row: TokenRow, station: string | null): Token {
  return {
    id: row.id,
    name: row.name,
    station,
    scopes: scopesOf(row),
    designs: designsOf(row),
    createdBy: row.createdBy,
    createdAt: row.createdAt.toISOString(),
    expiresAt: row.expiresAt.toISOString(),
    lastUsedAt: row.lastUsedAt?.toISOString() ?? null,
    revokedAt: row.revokedAt?.toISOString() ?? null,
  }
}

export const scopesOf = (row: Pick<TokenRow, 'scopes'>) => JSON.parse(row.scopes) as Scope[]
export const designsOf = (row: Pick<TokenRow, 'designs'>) =>
  row.designs === null ? null : (JSON.parse(row.designs) as string[])

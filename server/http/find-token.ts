import { timingSafeEqual } from 'node:crypto'
import type { Database } from '../db/connection.ts'
import { sqlTime } from '../db/sql.ts'
import { sha256 } from '../ledger/crypto.ts'
import { designsOf, scopesOf } from '../models/token.ts'
import { parseTokenText } from '../policies/token-text.ts'
import type { TokenPrincipal } from './principal.ts'

/** How long a good token is taken as good without asking again. Revocation must hold within a second everywhere (S6). */
const trustedMs = 500
const usedEveryMs = 60_000
const rememberedMax = 1_000

type Found = {
  id: string
  secretHash: Buffer
  name: string
  stationId: string | null
  stationName: string | null
  scopes: string
  designs: string | null
  expiresAt: Date
  revokedAt: Date | null
  retiredAt: Date | null
  lastUsedAt: Date | null
}
type Remembered = { principal: TokenPrincipal; until: number }

export type TokenFinder = {
  find: (text: string) => Promise<TokenPrincipal | null>
  /** This process asks again at once: a token was revoked here. */
  forget: () => void
}

/** Finds who a token is. Wrong form, wrong secret, expired, revoked and retired station are one answer: nobody. */
export function tokenFinder(database: Database, now: () => Date): TokenFinder {
  const remembered = new Map<string, Remembered>()
  const find = async (text: string): Promise<TokenPrincipal | null> => {
    const parts = parseTokenText(text)
    if (!parts) return null
    const known = remembered.get(text)
    const at = now()
    if (known && known.until > Date.now() && known.principal.expiresAt > at) return known.principal
    const row = await read(database, parts.id)
    if (!row || !timingSafeEqual(sha256(Buffer.from(parts.secret)), row.secretHash)) return null
    if (row.revokedAt !== null || row.retiredAt !== null || row.expiresAt <= at) return null
    if (at.getTime() - (row.lastUsedAt?.getTime() ?? 0) >= usedEveryMs) await noteUse(database, row.id, at)
    const principal = principalOf(row)
    if (remembered.size >= rememberedMax) remembered.clear()
    remembered.set(text, { principal, until: Date.now() + trustedMs })
    return principal
  }
  return { find, forget: () => remembered.clear() }
}

async function read(database: Database, id: string): Promise<Found | null> {
  const [row] = await database.sql.rows<Found>(
    `SELECT t.id, t.secret_hash AS secretHash, t.name, t.station_id AS stationId, s.name AS stationName, t.scopes,
      t.designs, t.expires_at AS expiresAt, t.revoked_at AS revokedAt, s.retired_at AS retiredAt,
      t.last_used_at AS lastUsedAt
    FROM tokens t LEFT JOIN stations s ON s.id = t.station_id WHERE t.id = ?`,
    [id],
  )
  return row ?? null
}

/** Outside any recording, at most once a minute, and no reason to fail: it is a hint for the administrator. */
async function noteUse(database: Database, id: string, at: Date): Promise<void> {
  await database.sql
    .run('UPDATE tokens SET last_used_at = ? WHERE id = ?', [sqlTime(at), id])
    .catch(() => undefined)
}

function principalOf(row: Found): TokenPrincipal {
  return {
    kind: 'token',
    id: row.id,
    name: row.name,
    station: row.stationId === null ? null : { id: row.stationId, name: row.stationName ?? row.stationId },
    scopes: scopesOf(row),
    designs: designsOf(row),
    expiresAt: row.expiresAt,
  }
}

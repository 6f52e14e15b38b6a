import type * as z from 'zod'
import type { postToken, Token } from '../../shared/contract/tokens.ts'
import { OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import type { Sql } from '../db/sql.ts'
import { sqlTime } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { sha256 } from '../ledger/crypto.ts'
import { insertLeaves, newLeaf } from '../ledger/leaves.ts'
import type { Models } from '../models/define-models.ts'
import type { StationRow } from '../models/station.ts'
import { type TokenRow, tokenReply } from '../models/token.ts'
import { newTokenParts, type TokenParts, tokenText } from '../policies/token-text.ts'

type Asked = z.output<NonNullable<typeof postToken.body>>

/**
 * Makes a token. Its text is in the answer and nowhere else.
 * Guarantee: a station never has more than two live tokens, also when two are made at once (the station's row is the
 * lock); the token exists exactly when its `token` leaf does.
 */
export async function createToken(
  { database, now, notifyLedger }: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: Asked,
  by: string,
  parts: TokenParts = newTokenParts(),
): Promise<Token & { token: string }> {
  if (asked.station === null && asked.scopes.includes('trims:write')) {
    const message = 'A token that records trims acts for a station: name one.'
    throw new OgeeError('invalid-request', message, { errors: [{ path: '/station', message }] })
  }
  const at = now()
  const row: TokenRow = {
    id: parts.id,
    secretHash: Buffer.from(sha256(Buffer.from(parts.secret))),
    name: asked.name,
    stationId: asked.station,
    scopes: JSON.stringify([...new Set(asked.scopes)]),
    designs: asked.designs === null ? null : JSON.stringify([...new Set(asked.designs)]),
    createdBy: by,
    createdAt: at,
    expiresAt: new Date(at.getTime() + asked.days * 86_400_000),
    revokedAt: null,
    lastUsedAt: null,
  }
  const station = await transaction(database, async (sql) => {
    await requireDesigns(sql, asked.designs)
    const found = asked.station === null ? null : await lockStation(database.models, sql, asked.station, at)
    await database.models.tokens.create(row, sql.within)
    const { lastUsedAt: _, ...body } = tokenReply(row, found?.name ?? null)
    await insertLeaves(sql, [newLeaf('token', at.toISOString(), { format: 'ogee.token/1', ...body })])
    return found
  })
  notifyLedger()
  return { ...tokenReply(row, station?.name ?? null), token: tokenText(parts) }
}

async function requireDesigns(sql: Sql, keys: readonly string[] | null): Promise<void> {
  if (keys === null) return
  const rows = await sql.rows<{ designKey: string }>(
    'SELECT design_key AS designKey FROM designs WHERE design_key IN (?)',
    [keys],
  )
  const known = new Set(rows.map((row) => row.designKey))
  const missing = keys.findIndex((key) => !known.has(key))
  if (missing < 0) return
  throw new OgeeError('not-found', `There is no design ${keys[missing]}.`, {
    errors: [{ path: `/designs/${missing}`, message: 'There is no such design.' }],
  })
}

async function lockStation(models: Models, sql: Sql, id: string, at: Date): Promise<StationRow> {
  const station = (await models.stations.findByPk(id, { ...sql.within, lock: true }))?.get()
  if (!station) throw new OgeeError('not-found', 'There is no such station.')
  if (station.retiredAt !== null) {
    throw new OgeeError('station-retired', `Station ${station.name} is retired; it gets no tokens.`)
  }
  const live = await sql.rows(
    'SELECT id FROM tokens WHERE station_id = ? AND revoked_at IS NULL AND expires_at > ?',
    [id, sqlTime(at)],
  )
  if (live.length >= limits.liveTokensPerStation) {
    throw new OgeeError(
      'token-limit',
      `Station ${station.name} has ${live.length} live tokens, which is what rotation needs. Revoke one first.`,
    )
  }
  return station
}

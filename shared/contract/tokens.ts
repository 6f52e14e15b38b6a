import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint } from './endpoint.ts'
import { designKey, instant, plainText, scope } from './primitives.ts'

/** Tokens act for a station and never for a person. The text is shown once; only a hash of it is kept. */
export const tokenId = z.string().regex(/^[0-9A-Za-z]{8}$/)
export const tokenPattern = /^ogee_[0-9A-Za-z]{8}_[0-9A-Za-z]{36}$/

export const token = z
  .object({
    id: tokenId,
    name: z.string(),
    station: z.string().nullable(),
    scopes: z.array(scope),
    designs: z.array(designKey).nullable(),
    createdBy: z.string(),
    createdAt: instant,
    expiresAt: instant,
    lastUsedAt: instant.nullable(),
    revokedAt: instant.nullable(),
  })
  .meta({ id: 'Token' })
export type Token = z.output<typeof token>

const keeps = { roles: ['administrator'], scopes: [] } as const

export const listTokens = endpoint({
  id: 'listTokens',
  method: 'GET',
  path: '/tokens',
  summary: 'Tokens, newest first; never their text',
  access: keeps,
  reply: { status: 200, schema: z.object({ items: z.array(token) }) },
  refusals: [],
})

export const postToken = endpoint({
  id: 'createToken',
  method: 'POST',
  path: '/tokens',
  summary: 'Make a token; its text is in this answer and nowhere else, ever',
  access: keeps,
  body: z.strictObject({
    name: plainText(limits.tokenNameMax),
    station: z.uuid().nullable().default(null),
    scopes: z.array(scope).min(1).max(scope.options.length),
    designs: z.array(designKey).min(1).max(100).nullable().default(null),
    days: z.int().min(1).max(limits.tokenDaysMax).default(limits.tokenDaysDefault),
  }),
  reply: { status: 201, schema: token.extend({ token: z.string().regex(tokenPattern) }) },
  refusals: ['not-found', 'token-limit', 'station-retired'],
})

export const deleteToken = endpoint({
  id: 'revokeToken',
  method: 'DELETE',
  path: '/tokens/:id',
  summary: 'Revoke a token, at once and on every server',
  access: keeps,
  params: z.strictObject({ id: tokenId }),
  reply: { status: 204, schema: z.null() },
  refusals: ['not-found'],
})
